import { Refusal } from '@/lib/errors/refusal';
import { dimensionless, multiplyDimensions, raiseDimension, type Dimension } from '@/lib/units/dimension';
import type { Unit } from '@/lib/units/parse';
import type { Quantity, Term } from './quantity';

/**
 * First-order propagation (GUM 5.1.2) by forward-mode differentiation: every operation gives its value and its partial
 * derivatives, and the chain rule carries ∂y/∂x of each input along. Of columns row by row.
 */
export type Series = number | Float64Array;

/** z and its partial derivatives by both operands, each a number or one per row. */
export type Partials = { z: Series; dx: Series; dy: Series };

export function each(a: Series, f: (x: number) => number): Series {
  if (typeof a === 'number') return f(a);
  const result = new Float64Array(a.length);
  for (let i = 0; i < a.length; i++) result[i] = f(a[i]);
  return result;
}

export function each2(a: Series, b: Series, f: (x: number, y: number) => number): Series {
  if (typeof a === 'number') {
    if (typeof b === 'number') return f(a, b);
    const result = new Float64Array(b.length);
    for (let i = 0; i < b.length; i++) result[i] = f(a, b[i]);
    return result;
  }
  const result = new Float64Array(a.length);
  if (typeof b === 'number') for (let i = 0; i < a.length; i++) result[i] = f(a[i], b);
  else for (let i = 0; i < a.length; i++) result[i] = f(a[i], b[i]);
  return result;
}

const product = (x: number, y: number) => x * y;
const sum = (x: number, y: number) => x + y;

export function seriesOf(a: Quantity): Series {
  return a.kind === 'scalar' ? a.value : a.values;
}

type Terms = Map<string, Term<Series>>;

function addTerms(into: Terms, terms: ReadonlyMap<string, Term<Series>>, partial: Series): void {
  for (const [id, { input, c }] of terms) {
    const here = typeof c === 'number' && typeof partial === 'number' ? c * partial : each2(c, partial, product);
    const before = into.get(id)?.c;
    if (before === undefined) into.set(id, { input, c: here });
    else if (typeof before === 'number' && typeof here === 'number') into.set(id, { input, c: before + here });
    else into.set(id, { input, c: each2(before, here, sum) });
  }
}

/** The chain rule; what passes unchanged is not copied. */
function combined(a: Quantity, b: Quantity | null, { dx, dy }: Partials): ReadonlyMap<string, Term<Series>> {
  if (b === null || b.terms.size === 0) {
    if (dx === 1 || a.terms.size === 0) return a.terms;
  } else if (a.terms.size === 0 && dy === 1) {
    return b.terms;
  }
  const terms: Terms = new Map();
  addTerms(terms, a.terms, dx);
  if (b) addTerms(terms, b.terms, dy);
  return terms;
}

export type Shape = { dimension: Dimension; scale: Unit['scale']; hint: Unit | null; label: string };

/** Puts a result together; `label` names it for the reader where it is a column. */
export function assemble(a: Quantity, b: Quantity | null, partials: Partials, shape: Shape): Quantity {
  const terms = combined(a, b, partials);
  const { dimension, scale, hint, label } = shape;
  const column = a.kind === 'column' ? a : b?.kind === 'column' ? b : null;
  if (!column) {
    if (typeof partials.z !== 'number') throw new Error('A scalar operation gave a column.');
    return {
      kind: 'scalar',
      value: partials.z,
      dimension,
      scale,
      hint,
      terms: terms as ReadonlyMap<string, Term<number>>,
    };
  }
  const values = typeof partials.z === 'number' ? new Float64Array(column.values.length).fill(partials.z) : partials.z;
  for (let i = 0; i < values.length; i++) if (!Number.isFinite(values[i])) values[i] = NaN;
  const { handle, digest } = column;
  return { kind: 'column', handle, digest, key: label, label, values, dimension, scale, hint, terms };
}

/** Two columns go together row by row only where they are of one trace. */
export function sameRows(a: Quantity, b: Quantity): void {
  if (a.kind === 'column' && b.kind === 'column' && a.handle !== b.handle) {
    throw new Refusal(
      'not-allowed',
      `\`${a.label}\` and \`${b.label}\` are columns of different traces and have no common rows: take a mean of one first.`,
    );
  }
}

export function add(a: Quantity, b: Quantity, shape: Shape, sign: 1 | -1): Quantity {
  const z = sign === 1 ? each2(seriesOf(a), seriesOf(b), sum) : each2(seriesOf(a), seriesOf(b), (x, y) => x - y);
  return assemble(a, b, { z, dx: 1, dy: sign }, shape);
}

export function multiply(a: Quantity, b: Quantity, shape: Omit<Shape, 'dimension' | 'scale'>): Quantity {
  const x = seriesOf(a);
  const y = seriesOf(b);
  const dimension = multiplyDimensions(a.dimension, b.dimension);
  const z = typeof x === 'number' && typeof y === 'number' ? x * y : each2(x, y, product);
  const { hint, label } = shape;
  return assemble(a, b, { z, dx: y, dy: x }, { hint, label, dimension, scale: 'linear' });
}

/** b = 0 gives NaN rows in columns; of scalars the caller refuses it first. */
export function divide(a: Quantity, b: Quantity, shape: Omit<Shape, 'dimension' | 'scale'>): Quantity {
  const x = seriesOf(a);
  const y = seriesOf(b);
  const dimension = multiplyDimensions(a.dimension, b.dimension, -1);
  const whole: Shape = { hint: shape.hint, label: shape.label, dimension, scale: 'linear' };
  if (typeof x === 'number' && typeof y === 'number') {
    const quotient = x / y;
    return assemble(a, b, { z: quotient, dx: 1 / y, dy: b.terms.size > 0 ? -quotient / y : 0 }, whole);
  }
  const z = each2(x, y, (p, q) => p / q);
  const dy = b.terms.size > 0 ? each2(z, y, (p, q) => -p / q) : 0;
  return assemble(a, b, { z, dx: each(y, (q) => 1 / q), dy }, whole);
}

/** a to a fixed power. */
export function raise(a: Quantity, power: number, shape: Omit<Shape, 'dimension' | 'scale'>): Quantity {
  const x = seriesOf(a);
  const z = each(x, (p) => Math.pow(p, power));
  const dx = a.terms.size > 0 ? each(x, (p) => (power === 0 ? 0 : power * Math.pow(p, power - 1))) : 0;
  return assemble(
    a,
    null,
    { z, dx, dy: 0 },
    { ...shape, dimension: raiseDimension(a.dimension, power), scale: 'linear' },
  );
}

/** A function of one pure number or quantity, with its derivative. */
export function apply(
  a: Quantity,
  f: (x: number) => number,
  derivative: (x: number) => number,
  shape: Shape,
): Quantity {
  const x = seriesOf(a);
  const dx = a.terms.size > 0 ? each(x, derivative) : 0;
  return assemble(a, null, { z: each(x, f), dx, dy: 0 }, shape);
}

/** a^b with both uncertain; pure numbers, a > 0. */
export function power(a: Quantity, b: Quantity, label: string): Quantity {
  const x = seriesOf(a);
  const y = seriesOf(b);
  const z = each2(x, y, Math.pow);
  const dx = each2(
    each2(x, y, (p, q) => Math.pow(p, q - 1)),
    y,
    product,
  );
  const dy = each2(z, x, (p, q) => p * Math.log(q));
  return assemble(a, b, { z, dx, dy }, { dimension: dimensionless, scale: 'linear', hint: null, label });
}

export function negate<Q extends Quantity>(a: Q, label: string): Quantity {
  const shape = { dimension: a.dimension, scale: a.scale, hint: a.hint, label };
  return assemble(a, null, { z: each(seriesOf(a), (x) => -x), dx: -1, dy: 0 }, shape);
}

/** Row by row the smaller (sign −1) or larger (sign 1) of two. */
export function extreme(a: Quantity, b: Quantity, sign: 1 | -1, shape: Shape): Quantity {
  const x = seriesOf(a);
  const y = seriesOf(b);
  const first = (p: number, q: number) => sign * (p - q) >= 0;
  const partials = {
    z: each2(x, y, (p, q) => (Number.isNaN(p) || Number.isNaN(q) ? NaN : first(p, q) ? p : q)),
    dx: each2(x, y, (p, q) => (first(p, q) ? 1 : 0)),
    dy: each2(x, y, (p, q) => (first(p, q) ? 0 : 1)),
  };
  return assemble(a, b, partials, shape);
}
