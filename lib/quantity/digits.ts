/**
 * Numbers as digits. Everything here goes through toExponential and toPrecision, which ECMAScript defines exactly, so
 * that the same double gives the same text in every engine.
 */
export type Digits = {
  negative: boolean;
  /** `149.803`, without sign. */
  number: string;
  /** Uncertainty in units of the last digit, `28`, and as a number of its own, `0.028`; null for an exact number. */
  last: string | null;
  plusMinus: string | null;
  /** The whole times 10^exponent. */
  exponent: number;
};

function exponential(value: number, significant: number): { digits: string; exponent: number } {
  const [mantissa = '0', exponent = '0'] = Math.abs(value)
    .toExponential(significant - 1)
    .split('e');
  return { digits: mantissa.replace('.', ''), exponent: Number(exponent) };
}

/**
 * Exponent of the value at 17 significant digits. The shortest digits that give the same double are found faster, and have
 * the same exponent unless they were rounded up to a power of ten.
 */
function exponentOf(value: number): number {
  const [mantissa = '', exponent = '0'] = Math.abs(value).toExponential().split('e');
  return mantissa === '1' ? exponential(value, 17).exponent : Number(exponent);
}

/** `digits` × 10^place as a decimal number; place ≤ 0. */
function pointed(digits: string, place: number): string {
  if (place >= 0) return digits + '0'.repeat(place);
  const padded = digits.padStart(1 - place, '0');
  return `${padded.slice(0, place)}.${padded.slice(place)}`;
}

/**
 * A power of ten is split off where the first digit stands further from the point than this, and where zeros before the
 * point would claim digits that are not known.
 */
const largest = 9;
const largestRound = 6;
const smallest = -4;

/** value ± u with `significant` digits of u (GUM 7.2.6); u > 0. */
export function uncertainDigits(value: number, u: number, significant: number): Digits {
  const { digits: last, exponent: uExponent } = exponential(u, significant);
  const place = uExponent - (significant - 1);
  let number = '0';
  let top = uExponent;
  if (value !== 0) {
    const count = exponentOf(value) - place + 1;
    if (count >= 1 && count <= 21) {
      const read = exponential(value, count);
      // Rounding up may give one digit more: 9.996 at three digits is 10.0.
      number = read.digits.padEnd(read.exponent - place + 1, '0');
      top = Math.max(top, read.exponent);
    } else if (count > 21) {
      // The uncertainty lies beyond what a double resolves: it has no digit here.
      return exactDigits(value);
    } else if (count === 0 && Math.abs(value) >= 0.5 * Number(`1e${place}`)) {
      number = '1';
    }
  }
  const shift = place > 0 || top > largest || top < smallest ? top : 0;
  return {
    negative: value < 0 && /[1-9]/.test(number),
    number: pointed(number, place - shift),
    last,
    plusMinus: pointed(last, place - shift),
    exponent: shift,
  };
}

/** An exact number: all its digits where they are at most ten, else seven. Never binary noise. */
export function exactDigits(value: number): Digits {
  if (value === 0) return { negative: false, number: '0', last: null, plusMinus: null, exponent: 0 };
  let read = exponential(value, 12);
  if (read.digits.replace(/0+$/, '').length > 10) read = exponential(value, 7);
  const digits = read.digits.replace(/0+$/, '');
  const round = read.exponent > largestRound && digits.length <= read.exponent;
  const shift = round || read.exponent > largest || read.exponent < smallest ? read.exponent : 0;
  const place = read.exponent - (digits.length - 1) - shift;
  return { negative: value < 0, number: pointed(digits, place), last: null, plusMinus: null, exponent: shift };
}

/** Digit groups of three from the point outwards, where a side has more than four digits (SI Brochure 5.4.4). */
export function grouped(number: string, separator: string): string {
  const [whole = '', decimals] = number.split('.');
  const left = whole.length > 4 ? whole.replace(/\B(?=(\d{3})+$)/g, separator) : whole;
  if (decimals === undefined) return left;
  const right = decimals.length > 4 ? decimals.replace(/(\d{3})(?=\d)/g, `$1${separator}`) : decimals;
  return `${left}.${right}`;
}
