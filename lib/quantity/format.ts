import { inUnit, prefixPower, readableUnit, takesPrefix, withPrefix } from '@/lib/units/choose';
import type { Dimension } from '@/lib/units/dimension';
import type { Unit } from '@/lib/units/parse';
import { celsiusZero } from '@/lib/units/table';
import { exactDigits, grouped, uncertainDigits, type Digits } from './digits';

/** A value as it is shown: its numbers in the chosen unit, and the digits that they support. */
export type Shown = {
  value: number;
  u: number;
  unit: Unit;
  digits: Digits;
};

export type ShownWish = { unit: Unit | null; significant: number | null };

type Measured = { value: number; dimension: Dimension; scale: Unit['scale']; hint: Unit | null };

export const usualDigits = 2;

/** Power in W of a level in dBm, and back. */
export const wattsOfLevel = (level: number): number => 1e-3 * Math.pow(10, level / 10);
export const levelOfWatts = (watts: number): number => 10 * Math.log10(watts / 1e-3);

/** Chooses unit and digits. `u` in coherent SI; 0 where the value is exact. `wish.unit` must fit the dimension. */
export function show(measured: Measured, u: number, wish: ShownWish): Shown {
  const significant = wish.significant ?? usualDigits;
  const at = (unit: Unit): Shown => {
    const { value, spread } = numbersIn(measured, u, unit);
    return {
      value,
      u: spread,
      unit,
      digits: spread > 0 ? uncertainDigits(value, spread, significant) : exactDigits(value),
    };
  };
  if (wish.unit) return at(wish.unit);
  if (measured.scale !== 'linear' && measured.hint) return at(measured.hint);
  const unit = readableUnit(measured.dimension, Math.max(Math.abs(measured.value), u), measured.hint);
  const first = at(unit);
  // Digits of u before the point mean that the prefix is too small: 149(120) pA is 0.15(12) nA.
  if (first.digits.exponent !== 0 && first.u >= 1 && takesPrefix(unit) && first.u < 1000) {
    const next = at(withPrefix(unit, prefixPower(unit) + 3));
    if (next.digits.exponent === 0) return next;
  }
  return first;
}

function numbersIn(measured: Measured, u: number, unit: Unit): { value: number; spread: number } {
  if (unit.scale === 'celsius' && measured.scale === 'celsius') {
    // 15 digits: the sum with 273.15 leaves noise in the last ones.
    return { value: Number((measured.value - celsiusZero).toFixed(11)), spread: u };
  }
  if (unit.scale === 'level') {
    return { value: levelOfWatts(measured.value), spread: ((u / measured.value) * 10) / Math.LN10 };
  }
  return { value: inUnit(measured.value, unit), spread: inUnit(u, unit) };
}

const raisedCharacters: Record<string, string> = {
  '-': '⁻', '0': '⁰', '1': '¹', '2': '²', '3': '³', '4': '⁴', '5': '⁵', '6': '⁶', '7': '⁷', '8': '⁸', '9': '⁹',
}; // prettier-ignore

const thin = '\u2009';

export type Notation = 'concise' | 'plus-minus';

/** `149.803(28) pA`, or `(149.803 ± 0.028) pA`, with thin spaces. */
export function writeText(shown: Shown, notation: Notation = 'concise'): string {
  const { digits, unit } = shown;
  const power =
    digits.exponent === 0 ? '' : `×10${[...String(digits.exponent)].map((c) => raisedCharacters[c]).join('')}`;
  const number = (digits.negative ? '−' : '') + grouped(digits.number, thin);
  const withUnit = unit.text === '' ? '' : thin + unit.text;
  if (digits.last === null || digits.plusMinus === null) return `${number}${power}${withUnit}`;
  if (notation === 'concise') return `${number}(${digits.last})${power}${withUnit}`;
  const both = `${number} ± ${grouped(digits.plusMinus, thin)}`;
  return power || withUnit ? `(${both})${power}${withUnit}` : both;
}

/** An uncertainty or contribution by itself, with two digits: `28 fA`. */
export function writeSpread(u: number, dimension: Dimension, hint: Unit | null, significant = usualDigits): string {
  const unit = readableUnit(dimension, u, hint);
  const value = inUnit(u, unit);
  if (u === 0) return unit.text === '' ? '0' : `0${thin}${unit.text}`;
  const rounded = Number(value.toPrecision(significant));
  const text = writeText({ value: rounded, u: 0, unit, digits: exactDigits(rounded) });
  return text;
}
