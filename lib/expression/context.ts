import type { Correlations } from '@/lib/quantity/correlation';
import type { RowRanges } from '@/lib/quantity/input';
import type { Column, Quantity } from '@/lib/quantity/quantity';
import type { StatisticsCache } from './statistics';

/** Thrown where samples are still on their way; not an error. */
export class Pending extends Error {
  constructor(readonly what: string) {
    super(`${what} is still being loaded.`);
    this.name = 'Pending';
  }
}

/** Rows of a trace by the name of a span; `axis` gives the column that a slope or integral is taken against. */
export type SpanRows = { name: string; rows: RowRanges; rowsKey: string; axis: () => Column };

/** What the calculation of one line may ask for. Every question may throw a Refusal or Pending. */
export type Context = {
  /** Identity of the line, prefix of its inputs' ids, and its symbol. */
  id: string;
  symbol: string;
  symbolValue: (name: string) => Quantity;
  /** A column (`t1.I`), or a quantity that is given under such a name (`esc1.tau`). */
  column: (handle: string, name: string) => Quantity;
  span: (handle: string, name: string) => SpanRows;
  /** Whether some line defines this symbol. */
  isSymbol: (name: string) => boolean;
  correlations: Correlations;
  statistics: StatisticsCache;
  warn: (sentence: string) => void;
  /** Counts work with columns, in rows times operations; refuses where it is too much. */
  spend: (amount: number) => void;
};
