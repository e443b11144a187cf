import { request, requestColumn, refusalIn, Unreachable } from '@/components/hooks/request';
import type { PlotView, SampleSource, ViewRange } from '@/lib/plot/view';
import { decodeView, memorySource, plotView, rowNumberSource } from '@/lib/plot/view';
import { ColumnStats } from '@/lib/trace-format/column-stats';
import type { Direction } from '@/lib/trace-format/parsed-trace';

/** A column that can be an axis. Samples are in `unit`; null means that nobody has stated it. */
export type PlotColumn = { symbol: string; unit: string | null; min: number | null; max: number | null };

export type RowPage = { from: number; total: number; rows: (number | null)[][] };

/** Where a plot's data comes from: memory, or the server's pyramid. Columns go by symbol; x null is the row number. */
export type PlotProvider = {
  columns: PlotColumn[];
  rows: number;
  view: (x: string | null, y: string, range: ViewRange) => Promise<PlotView>;
  page: (from: number, count: number) => Promise<RowPage>;
  column: (symbol: string) => Promise<Float64Array>;
};

function directionOf(samples: Float64Array): { direction: Direction; min: number | null; max: number | null } {
  const stats = new ColumnStats();
  stats.add(samples, samples.length);
  return { direction: stats.direction, min: stats.min, max: stats.max };
}

/** Columns that are in memory: derived ones, or those of a small table. All of one length. */
export function memoryProvider(given: { symbol: string; unit: string | null; values: Float64Array }[]): PlotProvider {
  const rows = Math.max(0, ...given.map(({ values }) => values.length));
  const facts = new Map(given.map((column) => [column.symbol, { ...column, ...directionOf(column.values) }]));
  const sources = new Map<string, SampleSource>();
  const need = (symbol: string) => {
    const column = facts.get(symbol);
    if (!column) throw new RangeError(`There is no column ${symbol}.`);
    return column;
  };
  const source = (symbol: string) => {
    const column = need(symbol);
    const known = sources.get(symbol) ?? memorySource(column.values, column.direction);
    sources.set(symbol, known);
    return known;
  };
  return {
    rows,
    columns: Array.from(facts.values(), ({ symbol, unit, min, max }) => ({ symbol, unit, min, max })),
    view: async (x, y, range) => plotView(x === null ? rowNumberSource(rows) : source(x), source(y), range),
    page: async (from, count) => {
      const end = Math.min(rows, from + count);
      const page = Array.from({ length: Math.max(0, end - from) }, (_, i) =>
        given.map(({ values }) => {
          const value = values[from + i] as number;
          return Number.isFinite(value) ? value : null;
        }),
      );
      return { from, total: rows, rows: page };
    },
    column: async (symbol) => need(symbol).values,
  };
}

/** A received trace on the server. `columns` in the order of the file, with the symbols and units that its author stated. */
export function serverProvider(traceId: string, rows: number, columns: PlotColumn[]): PlotProvider {
  const base = `/api/traces/${encodeURIComponent(traceId)}`;
  const place = (symbol: string) => {
    const index = columns.findIndex((column) => column.symbol === symbol);
    if (index < 0) throw new RangeError(`There is no column ${symbol}.`);
    return index;
  };
  return {
    rows,
    columns,
    view: async (x, y, { from, to, pixels }) => {
      const query = new URLSearchParams({ y: String(place(y)), pixels: String(Math.round(pixels)) });
      if (x !== null) query.set('x', String(place(x)));
      if (from !== null && to !== null) {
        query.set('from', String(from));
        query.set('to', String(to));
      }
      let response: Response;
      try {
        response = await fetch(`${base}/view?${query}`, { credentials: 'same-origin' });
      } catch (cause) {
        throw new Unreachable(cause);
      }
      if (!response.ok) throw await refusalIn(response);
      return decodeView(await response.arrayBuffer());
    },
    page: (from, count) => request<RowPage>('GET', `${base}/rows?from=${from}&count=${count}`),
    column: (symbol) => requestColumn(traceId, place(symbol)),
  };
}
