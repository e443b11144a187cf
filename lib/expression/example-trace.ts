import type { RawColumn, Sheet, TraceSource, ValueResult } from './contract';
import { evaluateSheet } from './evaluate';
import type { Span, StatedQuantity, TraceSettings } from '@/lib/document/attributes';

export type GivenColumn = {
  symbol: string;
  unit: string | null;
  samples: RawColumn | readonly number[];
  gain?: StatedQuantity;
  offset?: StatedQuantity;
};

/** A trace made of arrays, for tests and benchmarks; `digest` stands for the file's. */
export function traceOf(
  handle: string,
  columns: readonly GivenColumn[],
  options: { spans?: Span[]; sign?: TraceSettings['sign']; digest?: string } = {},
): TraceSource {
  const raws = columns.map(({ samples }): RawColumn =>
    typeof samples === 'string' || 'error' in samples ? samples : Float64Array.from(samples),
  );
  const first = raws.find((raw): raw is Float64Array => raw instanceof Float64Array);
  return {
    traceId: `trace-${handle}`,
    handle,
    fileName: `${handle}.csv`,
    digest: options.digest ?? `digest-${handle}`,
    rows: first?.length ?? 0,
    settings: {
      columns: columns.map(({ symbol, unit, gain, offset }) => ({
        name: symbol,
        symbol,
        unit,
        gain: gain ?? null,
        offset: offset ?? null,
      })),
      scanKind: null,
      sign: options.sign ?? null,
      signConvention: null,
      drive: { frequency: null, waveform: null, amplitude: null, load: null, wait: null, eject: null },
      instrument: { name: null, range: null, bandwidth: null, integrationTime: null, overload: null },
      sweepDirection: null,
    },
    spans: options.spans ?? [],
    column: (index) => raws[index] ?? { error: 'The file has no such column.' },
  };
}

/** Lines as cells `c0`, `c1` …, with the usual unit and digits. */
export function cellsOf(sources: readonly string[]) {
  return sources.map((source, i) => ({ id: `c${i}`, source, unit: null, digits: null }));
}

/** Calculates lines; `of` gives a result by its symbol. */
export function calculate(lines: readonly string[], traces: TraceSource[], previous?: Sheet) {
  const sheet = evaluateSheet({ cells: cellsOf(lines), traces }, previous);
  const of = (symbol: string): ValueResult => {
    const found = [...sheet.results.values()].find((result) => result.symbol === symbol);
    if (!found) throw new Error(`no ${symbol}`);
    return found;
  };
  return { sheet, of };
}
