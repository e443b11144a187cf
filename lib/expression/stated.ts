import { constants } from '@/lib/constants/constants';
import type { Distribution } from '@/lib/expression/contract';
import { Refusal } from '@/lib/errors/refusal';
import { wattsOfLevel } from '@/lib/quantity/format';
import { exactInput, type Input } from '@/lib/quantity/input';
import { fromInput, plain, type Scalar } from '@/lib/quantity/quantity';
import { fromUnit, one } from '@/lib/units/choose';
import { sameDimension } from '@/lib/units/dimension';
import { celsiusZero } from '@/lib/units/table';
import { parseUnit, type Unit } from '@/lib/units/parse';
import type { Literal } from './literal';

/** The constants as inputs without uncertainty. */
export const constantValues = new Map<string, Scalar>(
  [...constants.values()].map(({ symbol, name, value, unit, source }) => [
    symbol,
    fromInput(exactInput(`constant:${symbol}`, `${symbol}, ${name}`, value, parseUnit(unit), source)),
  ]),
);

/** What a stated quantity is called in budgets, and its identity. */
export type Named = { id: string; label: string };

/** A literal in coherent SI units. */
export function literalValue(literal: Literal): number {
  const unit = literal.unit ?? one;
  if (unit.scale === 'celsius') return literal.number + celsiusZero;
  if (unit.scale === 'level') return wattsOfLevel(literal.number);
  return fromUnit(literal.number, unit);
}

function literalSpread(literal: Literal, unit: Unit): number {
  const u = literal.u ?? 0;
  if (unit.scale === 'level') return ((wattsOfLevel(literal.number) * Math.LN10) / 10) * u;
  return unit.scale === 'celsius' ? u : fromUnit(u, unit);
}

/** A quantity as its author states it: type B where it has an uncertainty, else exact with a note. */
export function statedLiteral(literal: Literal, named: Named): Scalar {
  const unit = literal.unit ?? one;
  const u = literalSpread(literal, unit);
  return fromInput({
    ...named,
    type: u > 0 ? 'B' : 'exact',
    estimate: literalValue(literal),
    u,
    dimension: unit.dimension,
    unit,
    scale: unit.scale,
    distribution: 'normal',
    dof: null,
    note: u > 0 ? 'standard uncertainty as stated' : literal.exactly ? 'stated as exact' : 'no uncertainty stated',
    sample: null,
  });
}

/** A number that is part of a formula (the 2 of 2*pi) rather than an input. */
export function bareNumber(literal: Literal): Scalar {
  return plain(literal.number);
}

type Shape = { distribution: Distribution; divisor: number; words: string };

/** u of a half-width a: a/√3, a/√6, a/√2 (GUM 4.3.7, 4.3.9; arcsine: JCGM 101, 6.4.6). */
const shapes: Record<string, Shape> = {
  rectangular: { distribution: 'rectangular', divisor: Math.sqrt(3), words: 'rectangular, half-width' },
  triangular: { distribution: 'triangular', divisor: Math.sqrt(6), words: 'triangular, half-width' },
  arcsine: { distribution: 'arcsine', divisor: Math.sqrt(2), words: 'arcsine, half-width' },
};

/** `rectangular(0 V, 2 mV)`, `normal(1 GΩ, 240 Ω, 2)`, `student(0 nm, 5.8 nm, 24)`. Throws a Refusal. */
export function statedBy(name: string, given: readonly Scalar[], named: Named, written: readonly string[]): Scalar {
  const shape = shapes[name];
  const wanted = shape ? 2 : 3;
  if (given.length !== wanted) {
    const usage: Record<string, string> = {
      normal: 'normal(estimate, U, k), as in normal(1 GΩ, 240 Ω, 2)',
      student: 'student(estimate, u, degrees of freedom), as in student(0 nm, 5.8 nm, 24)',
    };
    throw new Refusal('syntax', `Write ${usage[name] ?? `${name}(estimate, half-width), as in ${name}(0 V, 2 mV)`}.`);
  }
  const [estimate, spread, third] = given as [Scalar, Scalar, Scalar | undefined];
  for (const scalar of given) {
    for (const { input } of scalar.terms.values()) {
      if (input.u > 0)
        throw new Refusal(
          'not-allowed',
          `${name}(…) takes plain numbers; ${input.label} has an uncertainty of its own.`,
        );
    }
  }
  if (!sameDimension(estimate.dimension, spread.dimension) || spread.scale !== 'linear' || estimate.scale === 'level') {
    throw new Refusal(
      'unit-clash',
      `In ${name}(${written.join(', ')}) estimate and width are not in units of the same kind.`,
    );
  }
  if (!(spread.value >= 0)) throw new Refusal('domain', `The width in ${name}(${written.join(', ')}) is negative.`);
  let u = spread.value;
  let dof: number | null = null;
  let note = `${shape?.words ?? ''} ${written[1] ?? ''}`;
  if (shape) {
    u = spread.value / shape.divisor;
  } else {
    const number = third?.value ?? NaN;
    if (!third || third.dimension.some((exponent) => exponent !== 0) || !(number > 0)) {
      throw new Refusal('domain', `The last argument of ${name}(…) is a positive number.`);
    }
    if (name === 'normal') {
      u = spread.value / number;
      note = `normal, U = ${written[1] ?? ''} with k = ${written[2] ?? ''}`;
    } else {
      if (number < 1) throw new Refusal('domain', 'There is at least one degree of freedom.');
      dof = number;
      note = `Student's t, ${written[2] ?? ''} degrees of freedom`;
    }
  }
  const input: Input = {
    ...named,
    type: u > 0 ? 'B' : 'exact',
    estimate: estimate.value,
    u,
    dimension: estimate.dimension,
    unit: estimate.hint,
    scale: estimate.scale,
    distribution: shape?.distribution ?? (dof === null ? 'normal' : 't'),
    dof,
    note,
    sample: null,
  };
  return fromInput(input);
}
