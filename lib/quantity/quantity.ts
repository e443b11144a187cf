import type { Dimension } from '@/lib/units/dimension';
import { dimensionless } from '@/lib/units/dimension';
import type { Unit } from '@/lib/units/parse';
import type { Input } from './input';

/** ∂y/∂x for one input; of a column one per row, or one number where it is the same in all rows. */
export type Term<C> = { input: Input; c: C };

export type Scalar = {
  kind: 'scalar';
  /** In coherent SI units; of °C the thermodynamic temperature in K, of dBm the power in W. */
  value: number;
  dimension: Dimension;
  scale: Unit['scale'];
  /** Unit that its author wrote, for reading; null where it follows from the dimension. */
  hint: Unit | null;
  terms: ReadonlyMap<string, Term<number>>;
};

export type Column = {
  kind: 'column';
  /** Handle of the trace that the rows belong to, and the digest of its file: the identity of its samples. */
  handle: string;
  digest: string;
  /** Equal keys are the same samples: the identity of what is averaged. */
  key: string;
  /** As a reader knows it: `t1.I`. */
  label: string;
  /** One per row, NaN where undefined. */
  values: Float64Array;
  dimension: Dimension;
  scale: Unit['scale'];
  hint: Unit | null;
  /** Inputs that all rows share (offset, gain, scalars); the scatter of the samples is not among them. */
  terms: ReadonlyMap<string, Term<number | Float64Array>>;
};

export type Quantity = Scalar | Column;

const noTerms: ReadonlyMap<string, Term<number>> = new Map();

/** A number without an input of its own. */
export function plain(value: number, dimension: Dimension = dimensionless, hint: Unit | null = null): Scalar {
  return { kind: 'scalar', value, dimension, scale: 'linear', hint, terms: noTerms };
}

export function fromInput(input: Input): Scalar {
  return {
    kind: 'scalar',
    value: input.estimate,
    dimension: input.dimension,
    scale: input.scale,
    hint: input.unit,
    terms: new Map([[input.id, { input, c: 1 }]]),
  };
}
