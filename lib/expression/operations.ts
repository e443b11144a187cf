import { Refusal } from '@/lib/errors/refusal';
import * as arithmetic from '@/lib/quantity/arithmetic';
import type { Quantity } from '@/lib/quantity/quantity';
import { unitFor } from '@/lib/units/choose';
import { dimensionless, isDimensionless, raiseDimension, sameDimension } from '@/lib/units/dimension';
import type { Unit } from '@/lib/units/parse';

/** The operators and scalar functions of lines, with the checks of units and domains that make them refuse. */

/** An operand and how its author wrote it, for sentences. */
export type Operand = { value: Quantity; written: () => string };

export function unitName(quantity: Quantity): string {
  if (quantity.scale !== 'linear' && quantity.hint) return quantity.hint.text;
  const unit = quantity.hint ?? unitFor(quantity.dimension);
  return unit.text === '' ? 'a pure number' : unit.text;
}

const inUnit = (operand: Operand): string => {
  const name = unitName(operand.value);
  return name === 'a pure number'
    ? `\`${operand.written()}\` is a pure number`
    : `\`${operand.written()}\` is in ${name}`;
};

function refuseOffScale(operand: Operand, what: string): void {
  if (operand.value.scale === 'celsius') {
    throw new Refusal(
      'unit-clash',
      `\`${operand.written()}\` is in °C, which has its zero elsewhere; ${what} would mean nothing. Write convert(${operand.written()}, K).`,
    );
  }
  if (operand.value.scale === 'level') {
    throw new Refusal(
      'unit-clash',
      `\`${operand.written()}\` is a level in dBm: write convert(${operand.written()}, W), or convert(${operand.written()}, V, 50 ohm) with its impedance.`,
    );
  }
}

function sumScale(a: Operand, b: Operand, sign: 1 | -1): Unit['scale'] {
  if (a.value.scale === 'linear' && b.value.scale === 'linear') return 'linear';
  for (const operand of [a, b]) if (operand.value.scale === 'level') refuseOffScale(operand, '');
  const [left, right] = [a.value.scale === 'celsius', b.value.scale === 'celsius'];
  if (left && right && sign === 1)
    throw new Refusal(
      'unit-clash',
      `The sum of two temperatures in °C (\`${a.written()}\`, \`${b.written()}\`) means nothing; their difference does.`,
    );
  if (!left && right && sign === -1)
    throw new Refusal('unit-clash', `\`${b.written()}\` is in °C and cannot be taken from a difference in K.`);
  return left !== right ? 'celsius' : 'linear';
}

export function sum(a: Operand, b: Operand, sign: 1 | -1, label: () => string): Quantity {
  const x = a.value;
  const y = b.value;
  arithmetic.sameRows(x, y);
  if (!sameDimension(x.dimension, y.dimension)) {
    throw new Refusal(
      'unit-clash',
      `${inUnit(a)} and ${inUnit(b)}: they cannot be ${sign === 1 ? 'added' : 'subtracted'}.`,
    );
  }
  const scale = sumScale(a, b, sign);
  const differs = x.scale === 'celsius' && y.scale === 'celsius';
  const hint = differs ? null : y.scale === 'celsius' ? y.hint : (x.hint ?? y.hint);
  return arithmetic.add(x, y, { dimension: x.dimension, scale, hint, label: labelOf(x, y, label) }, sign);
}

/** Labels are only made for columns: text for every step of a long line would cost more than its numbers. */
function labelOf(a: Quantity, b: Quantity | null, label: () => string): string {
  return a.kind === 'column' || b?.kind === 'column' ? label() : '';
}

/** The hint that survives a product: of the operand that is not a pure number. */
function productHint(a: Quantity, b: Quantity): Unit | null {
  if (isDimensionless(b.dimension)) return isDimensionless(a.dimension) ? null : a.hint;
  return isDimensionless(a.dimension) ? b.hint : null;
}

export function product(a: Operand, b: Operand, label: () => string): Quantity {
  refuseOffScale(a, 'a product of it');
  refuseOffScale(b, 'a product of it');
  arithmetic.sameRows(a.value, b.value);
  return arithmetic.multiply(a.value, b.value, {
    hint: productHint(a.value, b.value),
    label: labelOf(a.value, b.value, label),
  });
}

export function quotient(a: Operand, b: Operand, label: () => string): Quantity {
  refuseOffScale(a, 'a quotient of it');
  refuseOffScale(b, 'a quotient of it');
  arithmetic.sameRows(a.value, b.value);
  if (b.value.kind === 'scalar' && b.value.value === 0) {
    throw new Refusal('division-by-zero', `\`${b.written()}\` is 0: nothing can be divided by it.`);
  }
  const hint = isDimensionless(b.value.dimension) && !isDimensionless(a.value.dimension) ? a.value.hint : null;
  return arithmetic.divide(a.value, b.value, { hint, label: labelOf(a.value, b.value, label) });
}

const uncertain = (quantity: Quantity): boolean => [...quantity.terms.values()].some(({ input }) => input.u > 0);

export function power(a: Operand, b: Operand, label: () => string): Quantity {
  refuseOffScale(a, 'a power of it');
  refuseOffScale(b, 'a power of it');
  const [x, y] = [a.value, b.value];
  if (!isDimensionless(y.dimension)) throw new Refusal('unit-clash', `${inUnit(b)}: an exponent is a pure number.`);
  const text = labelOf(x, y, label);
  if (y.kind === 'scalar' && !uncertain(y)) {
    const isWhole = Number.isInteger(y.value);
    if (x.kind === 'scalar' && x.value < 0 && !isWhole) {
      throw new Refusal('domain', `\`${a.written()}\` is negative: it has no power of ${y.value}.`);
    }
    if (x.kind === 'scalar' && x.value === 0 && y.value < 0) {
      throw new Refusal('division-by-zero', `\`${a.written()}\` is 0: it has no negative power.`);
    }
    if (Math.abs(y.value) > 1000 || (!isDimensionless(x.dimension) && Math.abs(y.value) > 20)) {
      throw new Refusal('too-large', `The exponent ${y.value} is too large.`);
    }
    return arithmetic.raise(x, y.value, { hint: y.value === 1 ? x.hint : null, label: text });
  }
  arithmetic.sameRows(x, y);
  if (!isDimensionless(x.dimension)) {
    throw new Refusal('unit-clash', `${inUnit(a)}: with a unit, the exponent has to be a number without uncertainty.`);
  }
  if (x.kind === 'scalar' && x.value <= 0)
    throw new Refusal('domain', `\`${a.written()}\` is not positive: such a power needs a positive base.`);
  return arithmetic.power(x, y, text);
}

type Plain = {
  f: (x: number) => number;
  derivative: (x: number) => number;
  within?: (x: number) => boolean;
  needs?: string;
};

/** Functions of pure numbers. Rows of a column outside the domain come out as missing. */
const plainFunctions: Record<string, Plain> = {
  exp: { f: Math.exp, derivative: Math.exp },
  ln: { f: Math.log, derivative: (x) => 1 / x, within: (x) => x > 0, needs: 'a positive number' },
  log10: { f: Math.log10, derivative: (x) => 1 / (x * Math.LN10), within: (x) => x > 0, needs: 'a positive number' },
  sin: { f: Math.sin, derivative: Math.cos },
  cos: { f: Math.cos, derivative: (x) => -Math.sin(x) },
  tan: { f: Math.tan, derivative: (x) => 1 + Math.tan(x) ** 2 },
  asin: {
    f: Math.asin,
    derivative: (x) => 1 / Math.sqrt(1 - x * x),
    within: (x) => Math.abs(x) <= 1,
    needs: 'a number from −1 to 1',
  },
  acos: {
    f: Math.acos,
    derivative: (x) => -1 / Math.sqrt(1 - x * x),
    within: (x) => Math.abs(x) <= 1,
    needs: 'a number from −1 to 1',
  },
  atan: { f: Math.atan, derivative: (x) => 1 / (1 + x * x) },
};

export function scalarFunction(name: string, a: Operand, label: () => string): Quantity {
  refuseOffScale(a, `${name} of it`);
  const x = a.value;
  const text = labelOf(x, null, label);
  if (name === 'abs') {
    return arithmetic.apply(x, Math.abs, (v) => (v < 0 ? -1 : 1), {
      dimension: x.dimension,
      scale: 'linear',
      hint: x.hint,
      label: text,
    });
  }
  if (name === 'sqrt') {
    if (x.kind === 'scalar' && x.value < 0)
      throw new Refusal('domain', `\`${a.written()}\` is negative: it has no square root.`);
    if (x.kind === 'scalar' && x.value === 0 && uncertain(x))
      throw new Refusal(
        'domain',
        `\`${a.written()}\` is 0: the uncertainty of its square root is not determined to first order.`,
      );
    const shape = { dimension: raiseDimension(x.dimension, 0.5), scale: 'linear' as const, hint: null, label: text };
    return arithmetic.apply(x, Math.sqrt, (v) => (v === 0 ? 0 : 0.5 / Math.sqrt(v)), shape);
  }
  const found = plainFunctions[name];
  if (!found) throw new Error(`No function ${name}.`);
  if (!isDimensionless(x.dimension)) throw new Refusal('unit-clash', `${inUnit(a)}: ${name} takes a pure number.`);
  if (x.kind === 'scalar' && found.within && !found.within(x.value)) {
    throw new Refusal('domain', `${name} needs ${found.needs ?? 'another number'}; \`${a.written()}\` is not.`);
  }
  return arithmetic.apply(x, found.f, found.derivative, {
    dimension: dimensionless,
    scale: 'linear',
    hint: null,
    label: text,
  });
}

export function extremeOfTwo(a: Operand, b: Operand, sign: 1 | -1, label: () => string): Quantity {
  const [x, y] = [a.value, b.value];
  arithmetic.sameRows(x, y);
  if (!sameDimension(x.dimension, y.dimension) || x.scale !== y.scale) {
    throw new Refusal('unit-clash', `${inUnit(a)} and ${inUnit(b)}: they cannot be compared.`);
  }
  return arithmetic.extreme(x, y, sign, {
    dimension: x.dimension,
    scale: x.scale,
    hint: x.hint,
    label: labelOf(x, y, label),
  });
}

/** `convert(x, unit)`, and between dBm, W and V with the impedance as third argument (rms voltage, V² = P·R). */
export function convert(a: Operand, unit: Unit, impedance: Operand | null, label: () => string): Quantity {
  const x = a.value;
  const text = labelOf(x, null, label);
  const volt = sameDimension(unit.dimension, [2, 1, -3, -1, 0, 0, 0]) && unit.scale === 'linear';
  const shape = { dimension: unit.dimension, scale: unit.scale, hint: unit, label: text };
  if (sameDimension(x.dimension, unit.dimension)) {
    if (unit.scale === 'celsius' && x.scale === 'linear' && x.kind === 'scalar' && x.value < 0) {
      throw new Refusal('domain', `\`${a.written()}\` is below absolute zero.`);
    }
    if (unit.scale === 'level' && x.kind === 'scalar' && x.value <= 0) {
      throw new Refusal('domain', `\`${a.written()}\` is not positive: it has no level in dBm.`);
    }
    return arithmetic.apply(
      x,
      (v) => v,
      () => 1,
      shape,
    );
  }
  const isPower = sameDimension(x.dimension, [2, 1, -3, 0, 0, 0, 0]);
  if (isPower && volt) {
    if (!impedance) {
      throw new Refusal(
        'unit-clash',
        `\`${a.written()}\` is a power: its voltage depends on the impedance. Write convert(${a.written()}, ${unit.text}, 50 ohm) with the impedance of the line; the result is the rms voltage.`,
      );
    }
    if (!sameDimension(impedance.value.dimension, [2, 1, -3, -2, 0, 0, 0]))
      throw new Refusal('unit-clash', `${inUnit(impedance)}: the impedance is stated in ohm.`);
    const linear = {
      ...a,
      value: arithmetic.apply(
        x,
        (v) => v,
        () => 1,
        { dimension: x.dimension, scale: 'linear', hint: null, label: text },
      ),
    };
    const squared = product(linear, impedance, label);
    const volts = scalarFunction('sqrt', { value: squared, written: a.written }, label);
    return arithmetic.apply(
      volts,
      (v) => v,
      () => 1,
      shape,
    );
  }
  throw new Refusal(
    'unit-clash',
    `${inUnit(a)} and cannot be given in ${unit.text === '' ? 'a pure number' : unit.text}.`,
  );
}
