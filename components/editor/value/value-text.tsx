import { SymbolMath } from './symbol-math';

/** Symbol and result of a value, or its line where there is no result to show. */
export function ValueText({ source, shown, symbol }: { source: string; shown: string | null; symbol: string | null }) {
  if (!shown) return <span className="figures">{source}</span>;
  return (
    <>
      {symbol ? <SymbolMath symbol={symbol} equals /> : null}
      <span className="figures value-result">{shown}</span>
    </>
  );
}
