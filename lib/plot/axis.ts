/** Axis labels, ticks and their text: quantity/unit (ISO 80000-1), SI prefixes, digit groups by thin spaces (SI Brochure 5.4.4). */

const THIN = '\u2009';
const MINUS = '\u2212';

/** SI prefixes by powers of a thousand (SI Brochure, 9th ed., table 7). */
const prefixes: [number, string][] = [
  [12, 'T'],
  [9, 'G'],
  [6, 'M'],
  [3, 'k'],
  [0, ''],
  [-3, 'm'],
  [-6, 'µ'],
  [-9, 'n'],
  [-12, 'p'],
  [-15, 'f'],
  [-18, 'a'],
];
const prefixable = ['Hz', 'Ohm', 'Ω', 'A', 'V', 's', 'F', 'C', 'S', 'W', 'J', 'K', 'T', 'H', 'm', 'N', 'Pa', 'eV'];
const powers = new Map(prefixes.map(([power, prefix]) => [prefix, power]));
powers.set('u', -6).set('μ', -6);

/** `pA` as prefix and base, null for what takes no prefix: compound units, `min`, `dBm`, `%`. */
export function splitUnit(unit: string): { power: number; base: string } | null {
  for (const base of prefixable) {
    if (!unit.endsWith(base)) continue;
    const power = powers.get(unit.slice(0, unit.length - base.length));
    if (power !== undefined) return { power, base };
  }
  return null;
}

/**
 * The unit an axis is written in, and the factor from the column's unit to it: the largest sample lies between 1 and 1000.
 * A unit that takes no prefix, or an unstated one, stays as it is.
 */
export function axisUnit(unit: string | null, largest: number): { unit: string | null; factor: number } {
  const split = unit === null ? null : splitUnit(unit);
  if (!split || !(largest > 0) || !Number.isFinite(largest)) return { unit, factor: 1 };
  // Half a part in 1e12 keeps 999.9999999999 pA from becoming 1 nA and back with every redraw.
  const wanted = Math.floor(Math.log10(largest * (1 + 5e-13)) / 3) * 3 + split.power;
  const power = Math.min(12, Math.max(-18, wanted));
  const prefix = (prefixes.find(([p]) => p === power) as [number, string])[1];
  return { unit: prefix + split.base, factor: 10 ** (split.power - power) };
}

/** `I / pA`; `I (unit not stated)`; a compound unit in brackets, `I / (V/A)`; the bare quantity where the unit is 1. */
export function axisLabel(quantity: string, unit: string | null): string {
  if (unit === null) return `${quantity} (unit not stated)`;
  if (unit === '1' || unit === '') return quantity;
  return /[ /·*]/.test(unit) ? `${quantity} / (${unit})` : `${quantity} / ${unit}`;
}

function group(digits: string, fromEnd: boolean): string {
  if (digits.length <= 4) return digits;
  return fromEnd ? digits.replace(/\B(?=(?:[0-9]{3})+$)/g, THIN) : digits.replace(/([0-9]{3})(?=[0-9])/g, `$1${THIN}`);
}

/** A number as text with so many decimals: true minus sign, digits in threes. Never `NaN`: missing values are a dash. */
export function numberText(value: number, decimals: number): string {
  if (!Number.isFinite(value)) return '–';
  const text = Math.abs(value).toFixed(Math.min(20, Math.max(0, decimals)));
  const [whole = '0', fraction] = text.split('.');
  const negative = value < 0 && Number(text) !== 0;
  return (negative ? MINUS : '') + group(whole, true) + (fraction ? `.${group(fraction, false)}` : '');
}

/** A sample as a reader wants it: `significant` digits, powers of ten beyond 1e6 and below 1e-4. */
export function sampleText(value: number, significant = 6): string {
  if (!Number.isFinite(value)) return '–';
  if (value === 0) return '0';
  const exponent = Math.floor(Math.log10(Math.abs(value)));
  if (exponent >= 6 || exponent < -4) {
    const [mantissa = '0', power = '0'] = value.toExponential(significant - 1).split('e');
    return `${numberText(Number(mantissa), significant - 1)}${THIN}×${THIN}10${superscript(Number(power))}`;
  }
  return numberText(value, significant - 1 - exponent);
}

export function superscript(power: number): string {
  return String(power).replace(/./g, (char) => (char === '-' ? '⁻' : ('⁰¹²³⁴⁵⁶⁷⁸⁹'[Number(char)] as string)));
}

export type Tick = { value: number; text: string };

/** Ticks at 1, 2 or 5 times a power of ten, about `count` of them, with just the decimals that their step needs. */
export function linearTicks(from: number, to: number, count: number): Tick[] {
  const span = to - from;
  if (!(span > 0) || !Number.isFinite(span)) return [];
  const rough = span / Math.max(1, count);
  const power = Math.floor(Math.log10(rough));
  const fraction = rough / 10 ** power;
  const step = (fraction <= 1 ? 1 : fraction <= 2 ? 2 : fraction <= 5 ? 5 : 10) * 10 ** power;
  const decimals = Math.max(0, -Math.floor(Math.log10(step) + 1e-9));
  const ticks: Tick[] = [];
  const first = Math.ceil(from / step - 1e-9);
  const last = Math.floor(to / step + 1e-9);
  for (let i = first; i <= last && ticks.length < 100; i += 1) {
    const value = i * step;
    ticks.push({
      value,
      text: decimals > 12 || Math.abs(value) >= 1e9 ? sampleText(value) : numberText(value, decimals),
    });
  }
  return ticks;
}

/** Ticks of a logarithmic axis: decades, thinned to about `count`; within a decade or two also 2 and 5. */
export function logTicks(from: number, to: number, count: number): Tick[] {
  if (!(from > 0) || !(to > from)) return [];
  const low = Math.floor(Math.log10(from));
  const high = Math.ceil(Math.log10(to));
  const stride = Math.max(1, Math.ceil((high - low) / Math.max(1, count)));
  const within = high - low <= 2 ? [1, 2, 5] : [1];
  const ticks: Tick[] = [];
  for (let power = low; power <= high; power += stride) {
    for (const lead of within) {
      const value = lead * 10 ** power;
      if (value < from * (1 - 1e-9) || value > to * (1 + 1e-9)) continue;
      const small = power >= -2 && power <= 3;
      ticks.push({
        value,
        text: small
          ? numberText(value, Math.max(0, -power))
          : `${lead === 1 ? '' : `${lead}${THIN}×${THIN}`}10${superscript(power)}`,
      });
    }
  }
  return ticks;
}
