'use client';

import type { BudgetLine, ValueResult } from '@/lib/expression/contract';
import { TypesetHere } from '@/components/editor/equation/typeset-here';
import { SymbolMath } from '@/components/editor/value/symbol-math';

/** Two significant digits, as an uncertainty is given (GUM 7.2.6), without an exponent that programs write. */
export function twoDigits(number: number): string {
  if (number === 0) return '0';
  const [digits = '', power] = number.toExponential(1).split('e');
  const exponent = Number(power);
  if (exponent >= -5 && exponent <= 4) return number.toFixed(Math.max(0, 1 - exponent));
  const raised = String(exponent).replace(
    /[-0-9]/g,
    (sign) => '⁻⁰¹²³⁴⁵⁶⁷⁸⁹'[sign === '-' ? 0 : Number(sign) + 1] ?? sign,
  );
  return `${digits} × 10${raised}`;
}

/** Where a value comes from: expression, uncertainty, budget with bars, sources, warnings. */
export function ValueProvenance({
  result,
  source,
  onJump,
}: {
  result: ValueResult;
  source: string;
  onJump: (symbol: string) => void;
}) {
  const unit = result.unit && result.unit !== '1' ? `\u2009${result.unit}` : '';
  const notes = [...new Set(result.budget.flatMap((line) => (line.note ? [`${line.input}: ${line.note}`] : [])))];
  return (
    <>
      <section>
        <h2>Where this value comes from</h2>
        <p className="provenance-value">
          {result.symbol ? <SymbolMath symbol={result.symbol} equals /> : null}
          <span className="figures">{result.text ?? (result.state === 'pending' ? 'calculating' : '')}</span>
        </p>
        <p className="figures provenance-source">{source}</p>
        {result.expressionTex ? <TypesetHere tex={result.expressionTex} display={false} /> : null}
        {result.error ? <p className="text-error">{result.error.message}</p> : null}
        {result.state === 'ok' && result.u !== null ? (
          <p>
            {result.u === 0 ? 'Exact.' : `standard uncertainty ${twoDigits(result.u)}${unit}`}
            {result.dof !== null && Number.isFinite(result.dof)
              ? ` with ${Math.floor(result.dof)} effective degrees of freedom`
              : ''}
            {result.expanded !== null && result.u !== 0
              ? `; ${(result.coverage * 100).toFixed(2)} % interval ± ${twoDigits(result.expanded)}${unit}`
              : ''}
          </p>
        ) : null}
        {result.warnings.map((warning) => (
          <p key={warning} className="text-attention">
            {warning}
          </p>
        ))}
      </section>
      {result.budget.length > 0 ? <Budget lines={result.budget} unit={unit} /> : null}
      {result.dependsOn.length > 0 || notes.length > 0 ? (
        <section>
          <h2>Source</h2>
          {result.dependsOn.length > 0 ? (
            <p>
              reads{' '}
              {result.dependsOn.map((symbol) => (
                <button key={symbol} type="button" className="jump figures" onClick={() => onJump(symbol)}>
                  {symbol}
                </button>
              ))}
            </p>
          ) : null}
          {notes.map((note) => (
            <p key={note}>{note}</p>
          ))}
        </section>
      ) : null}
    </>
  );
}

function Budget({ lines, unit }: { lines: BudgetLine[]; unit: string }) {
  const greatest = Math.max(...lines.map((line) => line.contribution), Number.MIN_VALUE);
  return (
    <section>
      <h2>Uncertainty budget</h2>
      <table className="table-plain budget">
        <thead>
          <tr>
            <th scope="col">input</th>
            <th scope="col">type</th>
            <th scope="col">
              contribution <i>u</i>
              <sub>i</sub>
              {unit ? ` /${unit}` : ''}
            </th>
          </tr>
        </thead>
        <tbody>
          {lines.map((line) => (
            <tr key={line.inputId}>
              <th
                scope="row"
                title={`${line.estimate}, u = ${line.u}, ${line.distribution}${line.dof === null ? '' : `, ${line.dof} degrees of freedom`}`}
              >
                {line.input}
              </th>
              <td>{line.type}</td>
              <td>
                <span className="figures">{line.contributionText}</span>
                <span className="bar" aria-hidden="true">
                  <span style={{ width: `${(100 * line.contribution) / greatest}%` }} />
                </span>
              </td>
            </tr>
          ))}
        </tbody>
      </table>
    </section>
  );
}
