import { Refusal } from '@/lib/errors/refusal';
import {
  parseUnit,
  readExponent,
  superscriptToNumber,
  unitNamePattern,
  unknownUnit,
  normaliseUnitName,
  type Unit,
} from '@/lib/units/parse';
import { findUnit } from '@/lib/units/table';
import { isDimensionless, sameDimension } from '@/lib/units/dimension';
import { constantNames, functionNames, reservedWords } from './names';

/**
 * A quantity as typed: a number, its unit where it has one, and what is said of its uncertainty.
 * `149.80(3) pA`, `149.80 ± 0.03 pA`, `(149.80 ± 0.03) pA`, `149.80 pA ± 0.2 %`, `149.80 pA ± 50 ppm`,
 * `149.80 pA ± 60 fA (k = 2)`, `1.2e-3 V`, `20 MHz exactly`, `1.230(10)×10⁹ 1/s`. What stands after ± is a standard
 * uncertainty, or with `(k = …)` an expanded one. Thin spaces between digit groups are read.
 */
export type Literal = {
  text: string;
  /** In `unit`. */
  number: number;
  /** Standard uncertainty in `unit`; null where none is stated. */
  u: number | null;
  exactly: boolean;
  unit: Unit | null;
  /** Names after a solidus that were read as units and could be symbols or constants instead: `V/A`. */
  ambiguous: readonly string[];
};

const digits = String.raw`\d(?:[\u2009\u202F\u00A0]?\d)*`;
const numberPattern = new RegExp(
  String.raw`((?:${digits})(?:\.(?:${digits})?)?|\.(?:${digits}))` +
    String.raw`(?:\((\d+(?:\.\d+)?)\))?` +
    String.raw`(?:[eE]([+-]?\d+)(?![\w.])|\s?[×⋅·]\s?10(?:\^\(?([+-−]?\d+)\)?|([⁺⁻]?[⁰¹²³⁴⁵⁶⁷⁸⁹]+)))?`,
  'y',
);
const spacePattern = /\s*/y;
const plusMinusPattern = /\s*(?:±|\+\/-|\+-)\s*/y;
const coveragePattern = /\s*\(\s*k\s*=\s*(\d+(?:\.\d+)?)\s*\)/y;
const exactlyPattern = /\s*\bexactly\b/y;

function match(pattern: RegExp, text: string, at: number): RegExpExecArray | null {
  pattern.lastIndex = at;
  return pattern.exec(text);
}

type ReadNumber = { number: number; u: number | null; end: number };

const plainDigits = (text: string): string => text.replace(/[\u2009\u202F\u00A0]/g, '');

function readNumber(text: string, at: number): ReadNumber | null {
  const found = match(numberPattern, text, at);
  if (!found) return null;
  const [whole, mantissaText = '', last, e, raised, superscript] = found;
  const mantissa = plainDigits(mantissaText);
  const power =
    e !== undefined
      ? Number(e)
      : raised !== undefined
        ? Number(raised.replace('−', '-'))
        : superscript !== undefined
          ? superscriptToNumber(superscript)
          : 0;
  if (Math.abs(power) > 300) throw new Refusal('too-large', `\`${whole}\` has a power of ten beyond 300.`);
  const decimals = mantissa.includes('.') ? mantissa.length - mantissa.indexOf('.') - 1 : 0;
  const number = Number(`${mantissa}e${power}`);
  if (!Number.isFinite(number)) throw new Refusal('too-large', `\`${whole}\` is beyond the range of numbers here.`);
  let u: number | null = null;
  if (last !== undefined) u = last.includes('.') ? Number(`${last}e${power}`) : Number(`${last}e${power - decimals}`);
  return { number, u, end: at + whole.length };
}

/** Whether a literal may begin here: a digit, a point before a digit, or `(1.2 ± 0.1)`. */
export function literalStarts(text: string, at: number): boolean {
  return (
    /\d/.test(text[at] ?? '') || (text[at] === '.' && /\d/.test(text[at + 1] ?? '')) || bracketed(text, at) !== null
  );
}

type Bracketed = { value: ReadNumber; spread: ReadNumber; percent: Unit | null; end: number };

function bracketed(text: string, at: number): Bracketed | null {
  if (text[at] !== '(') return null;
  const start = at + 1 + (match(spacePattern, text, at + 1)?.[0].length ?? 0);
  const sign = text[start] === '-' || text[start] === '−' ? -1 : 1;
  const value = readNumber(text, sign === -1 ? start + 1 : start);
  if (!value) return null;
  const between = match(plusMinusPattern, text, value.end);
  if (!between) return null;
  const spread = readNumber(text, value.end + between[0].length);
  if (!spread) return null;
  const close = /\s*\)(?:\s?[×⋅·]\s?10(?:\^\(?([+-−]?\d+)\)?|([⁺⁻]?[⁰¹²³⁴⁵⁶⁷⁸⁹]+)))?/y;
  const end = match(close, text, spread.end);
  if (!end) return null;
  const power = end[1] !== undefined ? Number(end[1].replace('−', '-')) : end[2] ? superscriptToNumber(end[2]) : 0;
  const scaled = (one: ReadNumber, by: number): ReadNumber => ({
    ...one,
    number: Number(`${one.number * by}`) * Number(`1e${power}`),
  });
  return { value: scaled(value, sign), spread: scaled(spread, 1), percent: null, end: spread.end + end[0].length };
}

type ReadUnit = { unit: Unit; end: number; ambiguous: string[] };

/**
 * The unit after a number. In a line the solidus belongs to the unit only where it is written tight (`5 V/A`); with
 * `loose` (settings, nothing but the quantity) spaces may stand around it. `*` always multiplies.
 */
function readUnit(text: string, at: number, spaced: boolean, loose: boolean): ReadUnit | null {
  const ambiguous: string[] = [];
  let end = at;
  const start = at;
  const inverse = spaced && /^1\/[A-Za-zΩµμ(√]/.test(text.slice(at, at + 3));
  if (inverse) {
    end = at + 1;
  } else {
    const first = unitFactorEnd(text, at);
    if (first === null) return null;
    end = first;
  }
  let divided = false;
  for (;;) {
    const joint = loose ? /\s*\/\s*|\s*[·⋅]\s*|\s+/y : /\/|[·⋅]|[ \u00A0\u2009\u202F]+/y;
    const found = match(joint, text, end);
    if (!found) break;
    const next = end + found[0].length;
    const slash = found[0].includes('/');
    const nextEnd = unitFactorEnd(text, next);
    if (nextEnd === null) {
      const group = slash ? /\(([A-Za-zΩµμ²³^0-9 ·.-]+)\)/y : null;
      const inner = group ? match(group, text, next) : null;
      if (!inner || !isUnit(inner[1] ?? '')) break;
      for (const name of (inner[1] ?? '').match(/[A-Za-z]+/g) ?? []) ambiguous.push(name);
      end = next + inner[0].length;
      divided = true;
      continue;
    }
    if (divided) break;
    if (slash) {
      divided = true;
      const name = /^[A-Za-z]+/.exec(text.slice(next))?.[0];
      if (name && !inverse) ambiguous.push(name);
    }
    end = nextEnd;
  }
  return { unit: parseUnit(text.slice(start, end)), end, ambiguous };
}

function isUnit(text: string): boolean {
  try {
    parseUnit(text);
    return true;
  } catch (error) {
    if (error instanceof Refusal) return false;
    throw error;
  }
}

/** End of one unit with its exponent at `at`, or null where there is none: a symbol, a function, a column. */
function unitFactorEnd(text: string, at: number): number | null {
  const start = text[at] === '√' ? at + 1 : at;
  const name = match(unitNamePattern, text, start)?.[0];
  if (name === undefined || !findUnit(normaliseUnitName(name))) return null;
  const end = start + name.length;
  if (/[0-9_.(]/.test(text[end] ?? '')) return null;
  return readExponent(text, end)?.end ?? end;
}

/** %, ppm, ppb: behind ± they are of the value. */
function isShare(unit: Unit): boolean {
  return isDimensionless(unit.dimension) && /^(?:%|pp[mb])$/.test(unit.text);
}

function spread(
  value: ReadNumber,
  unit: Unit | null,
  by: ReadNumber,
  byUnit: Unit | null,
  text: string,
): { u: number; unit: Unit | null } {
  if (byUnit === null) {
    if (unit !== null) {
      throw new Refusal('unit-clash', `In \`${text}\` the uncertainty after ± has no unit: write it, or write %, ppm.`);
    }
    return { u: by.number, unit };
  }
  const relative = isShare(byUnit);
  if (unit === null) {
    if (relative) {
      throw new Refusal(
        'unit-clash',
        `\`${text}\` can be read in two ways: write (${value.number} ± ${by.number}) ${byUnit.text}, or the uncertainty as a plain number.`,
      );
    }
    return { u: by.number, unit: byUnit };
  }
  if (relative && !isShare(unit)) {
    if (unit.scale !== 'linear') {
      throw new Refusal(
        'unit-clash',
        `A relative uncertainty of a value in ${unit.text} means nothing: write it in ${unit.scale === 'celsius' ? 'K' : unit.text}.`,
      );
    }
    return { u: Math.abs(value.number) * by.number * byUnit.factor, unit };
  }
  if (!sameDimension(unit.dimension, byUnit.dimension) || (unit.scale === 'level') !== (byUnit.scale === 'level')) {
    throw new Refusal(
      'unit-clash',
      `In \`${text}\` the value is in ${unit.text} and its uncertainty in ${byUnit.text}.`,
    );
  }
  if (relative && unit.text !== byUnit.text) {
    throw new Refusal(
      'unit-clash',
      `In \`${text}\` it is not clear whether ${byUnit.text} is of the value: write both in ${unit.text}.`,
    );
  }
  return { u: by.number * (byUnit.factor / unit.factor), unit };
}

/** Reads a literal at `at`. Throws a Refusal where what follows the number cannot belong to it. */
export function readLiteral(text: string, at: number, loose = false): { literal: Literal; end: number } {
  const pair = bracketed(text, at);
  const value = pair?.value ?? readNumber(text, at);
  if (!value) throw new Refusal('syntax', `No number can be read in \`${text.slice(at, at + 20)}\`.`);
  let end = pair?.end ?? value.end;
  let u: number | null = pair ? pair.spread.number : value.u;
  let unit: Unit | null = null;
  let ambiguous: string[] = [];
  const takeUnit = (required: boolean) => {
    const space = match(spacePattern, text, end)?.[0].length ?? 0;
    const read = readUnit(text, end + space, space > 0, loose);
    if (read) {
      end = read.end;
      ambiguous = [...ambiguous, ...read.ambiguous];
      return read.unit;
    }
    if (required) refuseWord(text, end + space, text.slice(at, end));
    return null;
  };
  unit = takeUnit(true);
  const joint = match(plusMinusPattern, text, end);
  if (joint) {
    if (u !== null) throw new Refusal('syntax', `\`${text.slice(at, end)}\` states its uncertainty twice.`);
    const by = readNumber(text, end + joint[0].length);
    if (!by) throw new Refusal('syntax', 'After ± stands a number: 149.80 pA ± 0.03 pA, 149.80 pA ± 50 ppm.');
    end = by.end;
    const byUnit = takeUnit(false);
    const settled = spread(value, unit, by, byUnit, text.slice(at, end));
    unit = settled.unit;
    u = settled.u;
  }
  const factor = u === null ? null : match(coveragePattern, text, end);
  if (factor && u !== null) {
    const k = Number(factor[1]);
    if (!(k > 0)) throw new Refusal('domain', 'The coverage factor k is a positive number.');
    u /= k;
    end += factor[0].length;
  }
  const exactly = match(exactlyPattern, text, end);
  if (exactly) {
    if (u !== null)
      throw new Refusal('syntax', `\`${text.slice(at, end)}\` is stated with an uncertainty and as exact.`);
    end += exactly[0].length;
  }
  const literal = {
    text: text.slice(at, end).trim(),
    number: value.number,
    u,
    exactly: exactly !== null,
    unit,
    ambiguous,
  };
  return { literal, end };
}

/** A word right after a number is a unit or a mistake; says which. */
function refuseWord(text: string, at: number, number: string): void {
  const word = /^[A-Za-zΑ-Ωα-ωµμ°℃%][A-Za-z0-9_Α-Ωα-ω°℃%]*/.exec(text.slice(at))?.[0];
  if (word === undefined || word === 'exactly') return;
  if (reservedWords.has(word)) {
    throw new Refusal('not-allowed', `\`${word}\` is a reserved word and does nothing here.`);
  }
  if (word === 'dB' || word === 'k') return;
  const after = text[at + word.length];
  if (constantNames.has(word) || functionNames.has(word) || after === '(' || after === '.' || /[\d_]/.test(word)) {
    throw new Refusal(
      'syntax',
      `\`${number.trim()} ${word}\` is not read as a product: write \`${number.trim()}*${word}\`.`,
    );
  }
  throw unknownUnit(word, ` If ${word} is a symbol, write ${number.trim()}*${word}.`);
}
