/**
 * Numbers as instruments write them. Text to binary64 is correctly rounded: at most 15 significant digits and a power of
 * ten up to 22 are exact in one operation (W. D. Clinger, "How to read floating point numbers accurately", PLDI 1990);
 * everything else goes to the engine's own Number(), which ECMAScript defines as correctly rounded up to 20 digits and
 * which rounds correctly beyond in V8, SpiderMonkey and JavaScriptCore.
 */

export const powersOfTen = Float64Array.from({ length: 23 }, (_, i) => Number(`1e${i}`));

const missingWords = new Set([
  '',
  'nan',
  'na',
  'n/a',
  '--',
  '---',
  'null',
  'none',
  '-nan',
  '+nan',
  '1.#qnan',
  '-1.#ind',
]);
const infinities = new Set(['inf', '+inf', '-inf', 'infinity', '+infinity', '-infinity', '∞', '+∞', '-∞']);

/** Whether a cell says that its sample is missing. */
export function isMissing(cell: string): boolean {
  return missingWords.has(cell.toLowerCase());
}

/** Whether a cell says that its sample is infinite: an overload as some programs write it. */
export function isInfinite(cell: string): boolean {
  return infinities.has(cell.toLowerCase());
}

function isDigit(code: number): boolean {
  return code >= 48 && code <= 57;
}

/**
 * The value of one cell, or null where it is not a number. Accepts a sign (also U+2212), digits around one decimal mark,
 * and an exponent with e, E, d or D. No thousands separators.
 */
export function parseNumber(cell: string, decimal: '.' | ','): number | null {
  const mark = decimal === '.' ? 46 : 44;
  let i = 0;
  let out = '';
  const first = cell.charCodeAt(0);
  if (first === 0x2d || first === 0x2212) {
    out = '-';
    i = 1;
  } else if (first === 0x2b) {
    i = 1;
  }
  const start = i;
  while (i < cell.length && isDigit(cell.charCodeAt(i))) i += 1;
  const whole = cell.slice(start, i);
  let fraction = '';
  if (cell.charCodeAt(i) === mark) {
    const from = i + 1;
    i = from;
    while (i < cell.length && isDigit(cell.charCodeAt(i))) i += 1;
    fraction = cell.slice(from, i);
    // `1,` would let a comma between columns pass for a decimal comma.
    if (mark === 44 && fraction === '') return null;
  }
  if (whole === '' && fraction === '') return null;
  out += `${whole || '0'}.${fraction || '0'}`;
  if (i < cell.length) {
    if (!'eEdD'.includes(cell[i] as string)) return null;
    i += 1;
    let exponent = '';
    const sign = cell.charCodeAt(i);
    if (sign === 0x2d || sign === 0x2212) {
      exponent = '-';
      i += 1;
    } else if (sign === 0x2b) {
      i += 1;
    }
    const from = i;
    while (i < cell.length && isDigit(cell.charCodeAt(i))) i += 1;
    if (i === from || i < cell.length) return null;
    out += `e${exponent}${cell.slice(from)}`;
  }
  return Number(out);
}
