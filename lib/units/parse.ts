import { Refusal } from '@/lib/errors/refusal';
import { dimensionless, multiplyDimensions, type Dimension } from './dimension';
import { findUnit, nearUnits, powerOfTen, prefixes, type UnitAtom } from './table';

export type UnitFactor = { prefix: string; atom: UnitAtom; exponent: number };

export type Unit = {
  /** As written in results: `V/A`, `fA/√Hz`, `1/s`. */
  text: string;
  /** Coherent SI units in one of these. */
  factor: number;
  dimension: Dimension;
  scale: 'linear' | 'celsius' | 'level';
  factors: readonly UnitFactor[];
};

/** Letters that a unit's name is made of. */
export const unitNamePattern = /[A-Za-zµμΩΩ°℃%]+/y;
const exponentPattern =
  /\^\s*(?:\(\s*(-?\d+(?:\.\d+)?)(?:\s*\/\s*(\d+))?\s*\)|(-?\d+(?:\.\d+)?))|([⁺⁻]?[⁰¹²³⁴⁵⁶⁷⁸⁹]+)/y;
const superscripts = '⁰¹²³⁴⁵⁶⁷⁸⁹';

/** `µ` (U+00B5) for the Greek letter, `Ω` (U+03A9) for the ohm sign: one code point each. */
export function normaliseUnitName(name: string): string {
  return name.replaceAll('μ', 'µ').replaceAll('\u2126', 'Ω');
}

export function superscriptToNumber(text: string): number {
  const digits = [...text].map((character) =>
    character === '⁻' ? '-' : character === '⁺' ? '' : String(superscripts.indexOf(character)),
  );
  return Number(digits.join(''));
}

/** Reads an exponent (`^2`, `^-1`, `^0.5`, `^(1/2)`, `²`) at `at`; null where there is none. */
export function readExponent(text: string, at: number): { exponent: number; end: number } | null {
  exponentPattern.lastIndex = at;
  const match = exponentPattern.exec(text);
  if (!match) return null;
  const [, numerator, denominator, plain, raised] = match;
  const exponent =
    raised !== undefined
      ? superscriptToNumber(raised)
      : plain !== undefined
        ? Number(plain)
        : Number(numerator) / Number(denominator ?? 1);
  return { exponent, end: exponentPattern.lastIndex };
}

export function unknownUnit(name: string, extra = ''): Refusal {
  const near = nearUnits(normaliseUnitName(name));
  const hint =
    near.length > 0 ? ` Near ones: ${near.join(', ')}.` : ' Units are written as V, pA, kΩ, MHz, V/A, fA/√Hz.';
  return new Refusal('unknown-unit', `\`${name}\` is not a unit known here.${hint}${extra}`);
}

/** Makes a unit of its factors, of which `exponents` apply. Throws a Refusal where °C or dBm stands in a product. */
export function makeUnit(factors: readonly UnitFactor[]): Unit {
  let factor = 1;
  let dimension = dimensionless;
  let scale: Unit['scale'] = 'linear';
  for (const { prefix, atom, exponent } of factors) {
    if (atom.scale !== 'linear') {
      if (factors.length > 1 || exponent !== 1) {
        throw new Refusal(
          'unit-clash',
          atom.scale === 'celsius'
            ? '°C has its zero elsewhere and cannot be part of a compound unit: write K.'
            : `${atom.symbol} is a level and cannot be part of a compound unit: write W.`,
        );
      }
      scale = atom.scale;
    }
    const power = prefixes.get(prefix) ?? 0;
    const one =
      power === 0
        ? atom.factor
        : atom.factor === 1
          ? powerOfTen(power)
          : Number((atom.factor * powerOfTen(power)).toPrecision(15));
    // Dividing by 1e3 is exact where multiplying by 1e-3 is not.
    factor = exponent === 1 ? factor * one : exponent === -1 ? factor / one : factor * Math.pow(one, exponent);
    dimension = multiplyDimensions(dimension, atom.dimension, exponent);
  }
  return { text: writeUnit(factors), factor, dimension, scale, factors };
}

const cache = new Map<string, Unit>();

/**
 * Reads a unit such as `V/A`, `fA/√Hz`, `nV/Hz^0.5`, `1/s`, `J s`, `V/(A s)`, `m·s⁻¹`, `%`, `°C`.
 * As the SI Brochure (5.2) asks, nothing but a bracket may follow the second factor after a solidus.
 * Throws a Refusal that names an unknown unit and near ones.
 */
export function parseUnit(text: string): Unit {
  const known = cache.get(text);
  if (known) return known;
  if (text.length > 60) throw new Refusal('too-large', 'A unit is at most 60 characters long.');
  const reader = new UnitReader(normaliseUnitName(text));
  const unit = makeUnit(reader.read());
  if (cache.size > 2000) cache.clear();
  cache.set(text, unit);
  return unit;
}

class UnitReader {
  private at = 0;

  constructor(private readonly text: string) {}

  read(): UnitFactor[] {
    if (this.text.trim() === '')
      throw new Refusal('unknown-unit', 'No unit is written here; a pure number has the unit 1.');
    const factors = this.product(0);
    this.space();
    if (this.at < this.text.length) this.fail();
    return factors;
  }

  private product(depth: number): UnitFactor[] {
    if (depth > 4) throw new Refusal('too-large', 'A unit has at most four brackets inside one another.');
    const factors: UnitFactor[] = [];
    let divided = false;
    let sign = 1;
    for (;;) {
      this.space();
      factors.push(...this.factor(depth).map((one) => ({ ...one, exponent: one.exponent * sign })));
      const spaced = this.space();
      const next = this.text[this.at];
      if (next === undefined || next === ')') return factors;
      if (divided) {
        throw new Refusal(
          'syntax',
          `\`${this.text}\` can be read in two ways: put what stands below the line in brackets, as in V/(A s).`,
        );
      }
      if (next === '/') {
        divided = true;
        sign = -1;
        this.at++;
      } else if (next === '·' || next === '*' || next === '⋅') {
        this.at++;
      } else if (!spaced) {
        this.fail();
      }
    }
  }

  private factor(depth: number): UnitFactor[] {
    const character = this.text[this.at];
    if (character === '(') {
      this.at++;
      const inner = this.product(depth + 1);
      this.space();
      if (this.text[this.at] !== ')')
        throw new Refusal('syntax', `A bracket is not closed in the unit \`${this.text}\`.`);
      this.at++;
      return this.raised(inner);
    }
    if (character === '√') {
      this.at++;
      return this.factor(depth).map((one) => ({ ...one, exponent: one.exponent / 2 }));
    }
    if (this.text.startsWith('sqrt(', this.at)) {
      this.at += 4;
      return this.factor(depth).map((one) => ({ ...one, exponent: one.exponent / 2 }));
    }
    if (character === '1') {
      this.at++;
      return [];
    }
    unitNamePattern.lastIndex = this.at;
    const name = unitNamePattern.exec(this.text)?.[0];
    if (name === undefined) this.fail();
    const found = findUnit(name);
    if (!found) throw unknownUnit(name);
    this.at += name.length;
    return this.raised([{ ...found, exponent: 1 }]);
  }

  private raised(factors: UnitFactor[]): UnitFactor[] {
    const read = readExponent(this.text, this.at);
    if (!read) return factors;
    if (!Number.isFinite(read.exponent) || Math.abs(read.exponent) > 20) {
      throw new Refusal('syntax', `The exponent in the unit \`${this.text}\` is out of range.`);
    }
    this.at = read.end;
    return factors.map((one) => ({ ...one, exponent: one.exponent * read.exponent }));
  }

  private space(): boolean {
    const start = this.at;
    while (/\s/.test(this.text[this.at] ?? '')) this.at++;
    return this.at > start;
  }

  private fail(): never {
    throw new Refusal(
      'unknown-unit',
      `\`${this.text}\` cannot be read as a unit. Units are written as V, pA, V/A, fA/√Hz, 1/s.`,
    );
  }
}

const raisedDigits = (exponent: number): string =>
  String(exponent).replace(/[-\d]/g, (character) =>
    character === '-' ? '⁻' : (superscripts[Number(character)] ?? ''),
  );

/** One factor as results write it, with a positive exponent. */
function writeFactor({ prefix, atom, exponent }: UnitFactor): string {
  const name = prefix + atom.symbol;
  if (exponent === 1) return name;
  if (exponent === 0.5) return `√${name}`;
  return Number.isInteger(exponent) ? name + raisedDigits(exponent) : `${name}^${Number(exponent.toPrecision(6))}`;
}

/** `V/A`, `V/(A s)`, `1/s`, `fA/√Hz`; the empty string for a pure number. */
export function writeUnit(factors: readonly UnitFactor[]): string {
  const above = factors.filter(({ exponent }) => exponent > 0);
  const below = factors.filter(({ exponent }) => exponent < 0).map((one) => ({ ...one, exponent: -one.exponent }));
  if (below.length === 0) return above.map(writeFactor).join(' ');
  const numerator = above.length > 0 ? above.map(writeFactor).join(' ') : '1';
  const denominator = below.map(writeFactor).join(' ');
  return `${numerator}/${below.length > 1 ? `(${denominator})` : denominator}`;
}
