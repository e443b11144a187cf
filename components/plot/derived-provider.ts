import type { PlotProvider } from './provider';
import { memoryProvider } from './provider';

export type DerivedValues = { symbol: string; unit: string; values: Float64Array };

/**
 * A trace's own columns with those that values of the entry have made from them. A view of own columns comes from the
 * server; one that needs a derived column fetches what it is plotted against once, and is taken from memory.
 */
export function withDerived(own: PlotProvider, derived: DerivedValues[]): PlotProvider {
  if (derived.length === 0) return own;
  const made = memoryProvider(derived);
  const isDerived = (symbol: string | null) => symbol !== null && derived.some((column) => column.symbol === symbol);
  const fetched = new Map<string, Promise<Float64Array>>();
  const values = (symbol: string): Promise<Float64Array> => {
    if (isDerived(symbol)) return made.column(symbol);
    let column = fetched.get(symbol);
    if (!column) {
      column = own.column(symbol);
      fetched.set(symbol, column);
      // One that failed is fetched again at the next question.
      column.catch(() => fetched.delete(symbol));
    }
    return column;
  };
  return {
    rows: own.rows,
    columns: [...own.columns, ...made.columns],
    view: async (x, y, range) => {
      if (!isDerived(x) && !isDerived(y)) return own.view(x, y, range);
      const symbols = x === null || x === y ? [y] : [x, y];
      const columns = await Promise.all(
        symbols.map(async (symbol) => ({ symbol, unit: null, values: await values(symbol) })),
      );
      return memoryProvider(columns).view(x, y, range);
    },
    page: async (from, count) => {
      const page = await own.page(from, count);
      const more = await made.page(from, count);
      return { ...page, rows: page.rows.map((row, i) => [...row, ...(more.rows[i] ?? derived.map(() => null))]) };
    },
    column: values,
  };
}

/**
 * A trace's own columns with derived ones that are known by name; their samples are made by `load`, in the same order,
 * when a view, a page or a column first needs them.
 */
export function withPromised(
  own: PlotProvider,
  derived: { symbol: string; unit: string | null }[],
  load: () => Promise<DerivedValues[]>,
): PlotProvider {
  if (derived.length === 0) return own;
  let made: Promise<PlotProvider> | null = null;
  const whole = (): Promise<PlotProvider> => {
    if (!made) {
      made = load().then((values) => withDerived(own, values));
      // One that failed is tried again at the next question.
      made.catch(() => (made = null));
    }
    return made;
  };
  const isDerived = (symbol: string | null) => derived.some((column) => column.symbol === symbol);
  const of = async (...symbols: (string | null)[]) => (symbols.some(isDerived) ? whole() : own);
  return {
    rows: own.rows,
    columns: [...own.columns, ...derived.map(({ symbol, unit }) => ({ symbol, unit, min: null, max: null }))],
    view: async (x, y, range) => (await of(x, y)).view(x, y, range),
    page: async (from, count) => (await whole()).page(from, count),
    column: async (symbol) => (await of(symbol)).column(symbol),
  };
}
