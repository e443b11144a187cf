import type { Delimiter } from './parsed-trace';

/** Quantity, unit and symbol from a column's header. */

const bases =
  'A V s S Hz K T W J F H C Ω Ω Ohm ohm Ohms N m g mol Pa bar min h % ‰ ppm ppb deg degC °C ° rad dB dBm dBc e eV cd lm Wb G l L u 1'.split(
    ' ',
  );
// deci, centi, deca and hecto are left out on purpose: with them `dI/dV` would be a current divided by a unit.
const prefixes = ['', 'y', 'z', 'a', 'f', 'p', 'n', 'µ', 'μ', 'u', 'm', 'k', 'M', 'G', 'T', 'P'];
const atoms = new Set(
  prefixes.flatMap((prefix) => bases.map((base) => prefix + base)).concat(['cm', 'dm', 'hPa', 'hour']),
);
const exponents = new Set([
  '',
  '2',
  '3',
  '4',
  '-1',
  '-2',
  '-3',
  '-4',
  '²',
  '³',
  '⁻¹',
  '⁻²',
  '^2',
  '^3',
  '^-1',
  '^-2',
  '^(1/2)',
  '^0.5',
]);
/** Units that a name can carry after an underscore without being taken for a gate's name, as `V_S` would be. */
const suffixes = new Set(
  ['A', 'V', 'Hz', 's', 'Ohm', 'Ω']
    .flatMap((base) => ['f', 'p', 'n', 'u', 'µ', 'μ', 'm', 'k', 'M', 'G', 'a'].map((prefix) => prefix + base))
    .concat(['Hz', 'mK', 'dBm', 'Ohm', 'ppm', 'mT']),
);

function isUnitFactor(token: string): boolean {
  let body = token;
  const root = /^(?:√|sqrt)\(?/.exec(body);
  if (root) body = body.slice(root[0].length).replace(/\)$/, '');
  if (atoms.has(body)) return true;
  for (let cut = body.length - 1; cut > 0; cut -= 1) {
    if (atoms.has(body.slice(0, cut)) && exponents.has(body.slice(cut))) return true;
  }
  return false;
}

/** Whether a text is written as a unit: `pA`, `1/s`, `A/√Hz`, `V/A`, `m s^-2`. It may still be refused by the unit module. */
export function looksLikeUnit(text: string): boolean {
  if (text.length === 0 || text.length > 40) return false;
  const tokens = text.split(/[·⋅*/ ]/).filter((token) => token !== '');
  return tokens.length > 0 && tokens.length <= 6 && tokens.every(isUnitFactor);
}

/**
 * Separates quantity and unit in the usual forms: `I (pA)`, `V_exit [mV]`, `t / s`, `I_pA`, `I in pA`, `I, pA`.
 * A word in brackets at the end counts as the stated unit even if it is none: the page then asks, it does not drop it.
 */
export function splitHeader(header: string): { name: string; unit: string | null } {
  const text = header.trim();
  const last = text[text.length - 1];
  if (last === ')' || last === ']') {
    const open = matchingOpen(text);
    const inner = text.slice(open + 1, -1).trim();
    const name = text.slice(0, open).trim();
    if (open > 0 && name !== '') {
      if (inner === '-' || inner === '1') return { name, unit: '1' };
      if (inner !== '' && (last === ']' || looksLikeUnit(inner) || isSingleWord(inner))) return { name, unit: inner };
    }
  }
  const slash = text.lastIndexOf(' / ');
  if (slash > 0) {
    const unit = text.slice(slash + 3).trim();
    if (unit !== '' && (looksLikeUnit(unit) || isSingleWord(unit))) return { name: text.slice(0, slash).trim(), unit };
  }
  const tight = text.indexOf('/');
  if (tight > 0 && slash < 0) {
    const unit = text.slice(tight + 1).replace(/^\((.*)\)$/, '$1');
    if (looksLikeUnit(unit)) return { name: text.slice(0, tight).trim(), unit };
  }
  for (const joint of [' in ', ', ']) {
    const at = text.lastIndexOf(joint);
    if (at > 0 && looksLikeUnit(text.slice(at + joint.length))) {
      return { name: text.slice(0, at).trim(), unit: text.slice(at + joint.length) };
    }
  }
  const underscore = text.lastIndexOf('_');
  if (underscore > 0 && suffixes.has(text.slice(underscore + 1))) {
    return { name: text.slice(0, underscore), unit: text.slice(underscore + 1) };
  }
  return { name: text, unit: null };
}

function matchingOpen(text: string): number {
  let depth = 0;
  for (let i = text.length - 1; i >= 0; i -= 1) {
    if (text[i] === ')' || text[i] === ']') depth += 1;
    else if (text[i] === '(' || text[i] === '[') {
      depth -= 1;
      if (depth === 0) return i;
    }
  }
  return -1;
}

function isSingleWord(text: string): boolean {
  return text.length <= 20 && /^[\p{L}%°]+$/u.test(text);
}

/** The text of a unit-row cell: `(pA)`, `[pA]` and `pA` alike; null for an empty cell or a dash. */
export function unitOfCell(cell: string): string | null {
  const text = cell
    .trim()
    .replace(/^[([]([^()[\]]*)[)\]]$/, '$1')
    .trim();
  if (text === '' || text === '--') return null;
  return text === '-' ? '1' : text;
}

/** Whether a line below the header is its unit row: every cell a unit or empty, and at least one unit. */
export function isUnitRow(cells: string[]): boolean {
  let stated = 0;
  for (const cell of cells) {
    const unit = unitOfCell(cell);
    if (unit === null) continue;
    const bracketed = /^[([].*[)\]]$/.test(cell.trim());
    if (!bracketed && !looksLikeUnit(unit)) return false;
    stated += 1;
  }
  return stated > 0;
}

// Words of the expression grammar, which cannot name a column.
const reserved = new Set(['in', 'to', 'mod', 'and', 'or', 'not', 'xor', 'exactly']);
const maxSymbol = 64;

/** A name that expressions can use, from a quantity as the file writes it: `current, averaged` gives `current_averaged`. */
export function symbolFor(name: string, index: number): string {
  let symbol = '';
  for (const char of name.normalize('NFC').replace(/\u03bc/g, 'µ')) {
    const start = symbol === '';
    if (/[A-Za-zΑ-Ωα-ω]/.test(char) || (start && char === 'µ') || (!start && /[0-9]/.test(char))) symbol += char;
    else if (!start && !symbol.endsWith('_')) symbol += '_';
    if (symbol.length >= maxSymbol) break;
  }
  symbol = symbol.replace(/_$/, '');
  if (symbol === '') return `c${index + 1}`;
  return reserved.has(symbol) ? `${symbol}_` : symbol;
}

/** Symbols for all columns of a file, unique: a repeated one gets `_2`, `_3`. */
export function uniqueSymbols(names: string[]): string[] {
  const taken = new Set<string>();
  const first = names.map((name, index) => symbolFor(name, index));
  const firstUses = new Set(first);
  return first.map((symbol) => {
    let unique = symbol;
    for (let n = 2; taken.has(unique) || (unique !== symbol && firstUses.has(unique)); n += 1) {
      const suffix = `_${n}`;
      unique = symbol.slice(0, maxSymbol - suffix.length) + suffix;
    }
    taken.add(unique);
    return unique;
  });
}

/**
 * Splits a header that stands in a comment or whose words are parted by blanks into as many cells as there are columns.
 * Tries tab, semicolon, comma, runs of two blanks, then single blanks with a bracketed unit held to the word before it.
 */
export function splitLooseHeader(text: string, columns: number, delimiter: Delimiter): string[] | null {
  const trimmed = text.trim();
  const attempts: string[][] = [];
  if (delimiter !== ' ') attempts.push(trimmed.split(delimiter));
  attempts.push(trimmed.split('\t'), trimmed.split(';'), trimmed.split(','));
  attempts.push(trimmed.split(/ {2,}|\t+/), trimmed.split(/[ \t]+/), holdUnits(trimmed.split(/[ \t]+/)));
  for (const attempt of attempts) {
    const cells = attempt.map((cell) => cell.trim().replace(/^"([^"]*)"$/, '$1'));
    if (cells.length === columns && cells.every((cell) => cell !== '')) return cells;
  }
  return null;
}

function holdUnits(words: string[]): string[] {
  const cells: string[] = [];
  for (const word of words) {
    const before = cells[cells.length - 1];
    const joins = word === '/' || /^[([]/.test(word) || (before !== undefined && before.endsWith('/'));
    if (joins && before !== undefined) cells[cells.length - 1] = `${before} ${word}`;
    else cells.push(word);
  }
  return cells;
}
