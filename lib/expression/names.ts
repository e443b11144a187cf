/** Words and names that lines know. */

/** Kept for quantities or read by the parser as something else: no symbol has these names. */
export const reservedWords: ReadonlySet<string> = new Set([
  'in', 'to', 'mod', 'and', 'or', 'not', 'xor', 'exactly', 'end', 'true', 'false', 'null', 'undefined', 'NaN', 'Infinity',
]); // prettier-ignore

/** Functions of one pure number or quantity. */
export const scalarFunctions = [
  'sqrt', 'exp', 'ln', 'log10', 'abs', 'sin', 'cos', 'tan', 'asin', 'acos', 'atan',
] as const; // prettier-ignore

/** Functions of a column, over a span where one is named. */
export const columnFunctions = ['mean', 'sd', 'median', 'count', 'slope', 'integral'] as const;

/**
 * Quantities stated by a distribution (type B, GUM 4.3): `rectangular(0 V, 2 mV)` by estimate and half-width, likewise
 * `triangular` and `arcsine`; `normal(estimate, U, k)` as a certificate states it; `student(estimate, u, dof)` with the
 * degrees of freedom of u.
 */
export const statedFunctions = ['rectangular', 'triangular', 'arcsine', 'normal', 'student'] as const;

export const functionNames: ReadonlySet<string> = new Set<string>([
  ...scalarFunctions,
  ...columnFunctions,
  ...statedFunctions,
  'min',
  'max',
  'u',
  'rel',
  'expanded',
  'convert',
]);

/** Numbers and constants that lines know by name; their values stand in lib/constants. */
export const constantNames: ReadonlySet<string> = new Set(['e', 'h', 'hbar', 'k_B', 'c_0', 'pi']);

/** Longest line, deepest nesting and most literals that are read. */
export const limits = { length: 2000, brackets: 60, depth: 900, literals: 400 } as const;
