import type { Distribution } from '@/lib/expression/contract';
import type { Dimension } from '@/lib/units/dimension';
import type { Unit } from '@/lib/units/parse';

/** Rows of a trace as half-open ranges [start, end), ascending and apart. */
export type RowRanges = readonly (readonly [number, number])[];

const identities = new WeakMap<RowRanges, string>();

/**
 * Short text that is equal for equal rows. A span over a noisy axis has as many ranges as rows: many ranges are
 * told apart by two independent 32-bit hashes (FNV-1a with different starts), together with their number and ends.
 */
export function rowsIdentity(rows: RowRanges): string {
  const known = identities.get(rows);
  if (known !== undefined) return known;
  const first = rows[0];
  const last = rows.at(-1);
  let identity: string;
  if (!first || !last || rows.length <= 12) {
    identity = rows.map(([start, end]) => `${start}-${end}`).join(',');
  } else {
    let a = 0x811c9dc5;
    let b = 0x2545f491;
    for (const [start, end] of rows) {
      a = Math.imul(Math.imul(a ^ start, 0x01000193) ^ end, 0x01000193);
      b = Math.imul(Math.imul(b ^ end, 0x01000193) ^ (start + 0x9e37), 0x01000193);
      b ^= b >>> 15;
    }
    identity = `${first[0]}-${last[1]} in ${rows.length} ranges, ${(a >>> 0).toString(16)}${(b >>> 0).toString(16)}`;
  }
  identities.set(rows, identity);
  return identity;
}

/** What a statistic was taken from: kept so that two of them over common rows know their correlation. */
export type Sample = {
  /** Of the file that the samples stand in. */
  digest: string;
  statistic: 'mean' | 'other';
  /** One per row of the trace, NaN where missing. */
  values: Float64Array;
  rows: RowRanges;
  /** Equal for equal rows of one trace: their means share degrees of freedom. */
  group: string;
  /** Samples used, and samples per block at the plateau of the block averaging. */
  count: number;
  blockLength: number;
};

/** A quantity that nothing else on the page explains: what uncertainty enters through. */
export type Input = {
  /** Equal ids are the same input, however often it is used. */
  id: string;
  label: string;
  type: 'A' | 'B' | 'exact';
  /** In coherent SI units. */
  estimate: number;
  u: number;
  dimension: Dimension;
  unit: Unit | null;
  scale: Unit['scale'];
  distribution: Distribution;
  /** null: infinitely many. */
  dof: number | null;
  note: string | null;
  sample: Sample | null;
  /** Inputs of one group share degrees of freedom; results of one fit. Without it an input is a group of its own. */
  group?: string;
  /** Correlation coefficients with other inputs, by their ids, where they were stated. */
  correlated?: ReadonlyMap<string, number>;
};

export function exactInput(id: string, label: string, estimate: number, unit: Unit, note: string | null): Input {
  return {
    id,
    label,
    type: 'exact',
    estimate,
    u: 0,
    dimension: unit.dimension,
    unit,
    scale: unit.scale,
    distribution: 'normal',
    dof: null,
    note,
    sample: null,
  };
}
