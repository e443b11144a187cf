import type { Dimension } from './dimension';

/**
 * Units that lines, columns and settings may name, on the SI base units.
 * Sources: SI Brochure 9th ed. (2019), tables 2 to 4 (SI units), 7 (prefixes) and 8 (units accepted with the SI: min, h,
 * degree, litre, electronvolt); bar = 1e5 Pa by ISO 80000-4; ppm, ppb and % as the pure numbers that they stand for
 * (ISO 80000-1, 7.3.3); dBm is the level of a power re 1 mW (IEC 60027-3).
 */
export type UnitAtom = {
  symbol: string;
  /** Other spellings that are read, never written. */
  also: readonly string[];
  dimension: Dimension;
  /** Coherent SI units in one of these. */
  factor: number;
  prefixes: boolean;
  /** `celsius` has its zero elsewhere; `level` is logarithmic. Neither takes part in products. */
  scale: 'linear' | 'celsius' | 'level';
};

const none: Dimension = [0, 0, 0, 0, 0, 0, 0];
const length: Dimension = [1, 0, 0, 0, 0, 0, 0];
const mass: Dimension = [0, 1, 0, 0, 0, 0, 0];
const time: Dimension = [0, 0, 1, 0, 0, 0, 0];
const current: Dimension = [0, 0, 0, 1, 0, 0, 0];
const temperature: Dimension = [0, 0, 0, 0, 1, 0, 0];
const energy: Dimension = [2, 1, -2, 0, 0, 0, 0];
const power: Dimension = [2, 1, -3, 0, 0, 0, 0];
const pressure: Dimension = [-1, 1, -2, 0, 0, 0, 0];

function atom(
  symbol: string,
  dimension: Dimension,
  factor = 1,
  options: { also?: string[]; prefixes?: boolean; scale?: UnitAtom['scale'] } = {},
): UnitAtom {
  return {
    symbol,
    dimension,
    factor,
    also: options.also ?? [],
    prefixes: options.prefixes ?? true,
    scale: options.scale ?? 'linear',
  };
}

export const unitAtoms: readonly UnitAtom[] = [
  atom('m', length),
  atom('g', mass, 1e-3),
  atom('s', time),
  atom('A', current),
  atom('K', temperature),
  atom('mol', [0, 0, 0, 0, 0, 1, 0]),
  atom('cd', [0, 0, 0, 0, 0, 0, 1]),
  atom('V', [2, 1, -3, -1, 0, 0, 0]),
  atom('Ω', [2, 1, -3, -2, 0, 0, 0], 1, { also: ['ohm', 'Ohm'] }),
  atom('S', [-2, -1, 3, 2, 0, 0, 0]),
  atom('W', power),
  atom('J', energy),
  atom('C', [0, 0, 1, 1, 0, 0, 0]),
  atom('F', [-2, -1, 4, 2, 0, 0, 0]),
  atom('H', [2, 1, -2, -2, 0, 0, 0]),
  atom('Hz', [0, 0, -1, 0, 0, 0, 0]),
  atom('T', [0, 1, -2, -1, 0, 0, 0]),
  atom('Wb', [2, 1, -2, -1, 0, 0, 0]),
  atom('Pa', pressure),
  atom('N', [1, 1, -2, 0, 0, 0, 0]),
  atom('bar', pressure, 1e5),
  atom('eV', energy, 1.602176634e-19),
  atom('l', [3, 0, 0, 0, 0, 0, 0], 1e-3, { also: ['L'] }),
  atom('min', time, 60, { prefixes: false }),
  atom('h', time, 3600, { also: ['hour'], prefixes: false }),
  atom('rad', none),
  atom('deg', none, Math.PI / 180, { also: ['°'], prefixes: false }),
  atom('%', none, 0.01, { prefixes: false }),
  atom('ppm', none, 1e-6, { prefixes: false }),
  atom('ppb', none, 1e-9, { prefixes: false }),
  atom('°C', temperature, 1, { also: ['degC', '℃'], prefixes: false, scale: 'celsius' }),
  atom('dBm', power, 1, { prefixes: false, scale: 'level' }),
];

export const celsiusZero = 273.15;

/** Prefix → power of ten. SI Brochure 9th ed., table 7; `u` is read for `µ`. */
export const prefixes: ReadonlyMap<string, number> = new Map([
  ['', 0],
  ['y', -24],
  ['z', -21],
  ['a', -18],
  ['f', -15],
  ['p', -12],
  ['n', -9],
  ['µ', -6],
  ['m', -3],
  ['c', -2],
  ['d', -1],
  ['h', 2],
  ['k', 3],
  ['M', 6],
  ['G', 9],
  ['T', 12],
  ['P', 15],
  ['E', 18],
]);

/** Prefixes that results choose from, by their power of ten. */
export const prefixByPower: ReadonlyMap<number, string> = new Map(
  [...prefixes].filter(([, power]) => power % 3 === 0).map(([prefix, power]) => [power, prefix]),
);

/** 10^power as the double nearest to it; `10 ** power` may be off in the last bit, and differs between engines. */
export function powerOfTen(power: number): number {
  return Number(`1e${power}`);
}

export type NamedUnit = { prefix: string; atom: UnitAtom };

const byName = new Map<string, UnitAtom>();
for (const entry of unitAtoms) for (const name of [entry.symbol, ...entry.also]) byName.set(name, entry);

/** Reads one name such as `fA`, `kohm`, `min`: an exact unit first, then prefix and unit. */
export function findUnit(name: string): NamedUnit | null {
  const exact = byName.get(name);
  if (exact) return { prefix: '', atom: exact };
  const prefix = name[0] === 'u' ? 'µ' : name[0];
  if (prefix === undefined || !prefixes.has(prefix)) return null;
  const found = byName.get(name.slice(1));
  return found?.prefixes ? { prefix, atom: found } : null;
}

const commonNames = [...byName.keys()].flatMap((name) => {
  const entry = byName.get(name);
  return entry?.prefixes ? ['', 'a', 'f', 'p', 'n', 'µ', 'm', 'k', 'M', 'G'].map((prefix) => prefix + name) : [name];
});

/** Up to three unit names close to one that is not known: the same letters in another case, then one edit away. */
export function nearUnits(name: string): string[] {
  const lower = name.toLowerCase();
  const sameLetters = commonNames.filter((candidate) => candidate.toLowerCase() === lower);
  const near = name.length > 1 ? commonNames.filter((candidate) => oneEditApart(candidate, name)) : [];
  return [...new Set([...sameLetters, ...near])].slice(0, 3);
}

function oneEditApart(a: string, b: string): boolean {
  if (Math.abs(a.length - b.length) > 1 || a === b) return false;
  const [short, long] = a.length <= b.length ? [a, b] : [b, a];
  let at = 0;
  while (at < short.length && short[at] === long[at]) at++;
  return short.slice(short.length === long.length ? at + 1 : at) === long.slice(at + 1);
}
