import {
  baseUnits,
  dimensionKey,
  isDimensionless,
  multiplyDimensions,
  raiseDimension,
  sameDimension,
  type Dimension,
} from './dimension';
import { makeUnit, parseUnit, type Unit, type UnitFactor } from './parse';
import { findUnit, prefixByPower, prefixes, powerOfTen } from './table';

export const one: Unit = makeUnit([]);

/** Compound units in the order in which they are preferred for a result of that dimension. */
const preferred = [
  'A', 'V', 'Ω', 'S', 'K', 's', '1/s', 'm', 'g', 'T', 'W', 'J', 'C', 'F', 'H', 'Wb', 'Pa', 'N', 'mol', 'cd',
  'A/√Hz', 'V/√Hz', 'A²/Hz', 'V²/Hz', 'J s', 'J/K', 'V/K', 'A/s', 'V/s', 'K/s', 'T/s', 'V/m', 'm/s', '1/V', '1/A',
  '1/K', '1/T', 'A/K', 'K/V', 'Hz/V', 'V²', 'A²', 'K²', 's²', 'm²', 'm³',
].map((text) => parseUnit(text)); // prettier-ignore

const chosen = new Map<string, Unit>();

/** The unit, without prefix, that a result of this dimension is given in. */
export function unitFor(dimension: Dimension): Unit {
  if (isDimensionless(dimension)) return one;
  const key = dimensionKey(dimension);
  const known = chosen.get(key);
  if (known) return known;
  const unit = preferred.find((candidate) => sameDimension(candidate.dimension, dimension)) ?? searched(dimension);
  if (chosen.size > 500) chosen.clear();
  chosen.set(key, unit);
  return unit;
}

const parts = ['A', 'V', 'Ω', 'K', 's', 'J', 'C', 'F', 'T', 'm', 'Hz', 'W'].map((text) => parseUnit(text));
const powers = [1, -1, 2, -2, 0.5, -0.5, 3, -3];

/** The first power of one or product of two named units that fits, else the base units. */
function searched(dimension: Dimension): Unit {
  for (const power of powers) {
    for (const part of parts) {
      if (sameDimension(raiseDimension(part.dimension, power), dimension)) return raised([part, power]);
    }
  }
  for (const first of [1, -1, 2]) {
    for (const second of powers) {
      for (const a of parts) {
        for (const b of parts) {
          const product = multiplyDimensions(raiseDimension(a.dimension, first), b.dimension, second);
          if (a !== b && sameDimension(product, dimension)) return raised([a, first], [b, second]);
        }
      }
    }
  }
  const factors: UnitFactor[] = [];
  dimension.forEach((exponent, i) => {
    const found = findUnit(baseUnits[i] ?? '');
    if (exponent !== 0 && found) factors.push({ ...found, exponent });
  });
  return makeUnit(factors);
}

function raised(...terms: [Unit, number][]): Unit {
  return makeUnit(
    terms.flatMap(([unit, power]) => unit.factors.map((factor) => ({ ...factor, exponent: factor.exponent * power }))),
  );
}

/** Whether results may choose the prefix: the first factor stands alone above the line and takes prefixes. */
export function takesPrefix(unit: Unit): boolean {
  const first = unit.factors[0];
  return first !== undefined && first.exponent === 1 && first.atom.prefixes && first.atom.symbol !== 'rad';
}

const prefixed = new Map<string, Unit>();

/** The same unit with another power of ten (a multiple of three) as the prefix of its first factor. */
export function withPrefix(unit: Unit, power: number): Unit {
  const prefix = prefixByPower.get(power);
  const [first, ...rest] = unit.factors;
  if (prefix === undefined || first === undefined) return unit;
  const key = `${prefix}|${unit.text}`;
  let made = prefixed.get(key);
  if (!made) {
    made = makeUnit([{ ...first, prefix }, ...rest]);
    if (prefixed.size > 2000) prefixed.clear();
    prefixed.set(key, made);
  }
  return made;
}

/** Power of ten of the first factor's prefix. */
export function prefixPower(unit: Unit): number {
  return prefixes.get(unit.factors[0]?.prefix ?? '') ?? 0;
}

/**
 * The unit in which a magnitude (coherent SI) reads best. A hint (what the author typed, or the column's unit) is kept
 * where the number stays between 0.1 and 10 000 in it; else the SI prefix is chosen so that it lies between 1 and 1000.
 */
export function readableUnit(dimension: Dimension, magnitude: number, hint: Unit | null): Unit {
  const base = hint && sameDimension(hint.dimension, dimension) ? hint : unitFor(dimension);
  if (!takesPrefix(base) || magnitude === 0 || !Number.isFinite(magnitude)) return base;
  // Seven digits: 0.1 and 0.1 less a last bit choose the same prefix.
  const inHint = Number((magnitude / base.factor).toExponential(6));
  if (base === hint && inHint >= 0.1 && inHint < 10_000) return base;
  const plain = withPrefix(base, 0);
  const exponent = Number((magnitude / plain.factor).toExponential(6).split('e')[1]);
  const power = Math.max(-24, Math.min(18, Math.floor(exponent / 3) * 3));
  return withPrefix(base, power);
}

/** A number in coherent SI units, in `unit`. Divides where the factor is below one, which keeps 149.8e-12 A at 149.8 pA. */
export function inUnit(value: number, unit: Unit): number {
  if (unit.factor >= 1 || unit.factor === 0) return value / unit.factor;
  const inverse = 1 / unit.factor;
  return powerOfTen(Math.round(Math.log10(inverse))) === inverse ? value * inverse : value / unit.factor;
}

/** A number in `unit`, in coherent SI units, with the same care. */
export function fromUnit(value: number, unit: Unit): number {
  if (unit.factor >= 1 || unit.factor === 0) return value * unit.factor;
  const inverse = 1 / unit.factor;
  return powerOfTen(Math.round(Math.log10(inverse))) === inverse ? value / inverse : value * unit.factor;
}
