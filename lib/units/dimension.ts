/** Exponents of the SI base units, in this order: m, kg, s, A, K, mol, cd. Fractions occur (`A/√Hz`). */
export type Dimension = readonly [number, number, number, number, number, number, number];

export const baseUnits = ['m', 'kg', 's', 'A', 'K', 'mol', 'cd'] as const;

export const dimensionless: Dimension = [0, 0, 0, 0, 0, 0, 0];

/** Exponents such as 1/3 come back from products as 0.333…; nine decimals make them comparable. */
function tidy(exponent: number): number {
  const rounded = Math.round(exponent * 1e9) / 1e9;
  return rounded === 0 ? 0 : rounded;
}

/** Products and quotients made before: a sheet multiplies the same few dimensions at every keystroke. */
const products = new WeakMap<Dimension, WeakMap<Dimension, Dimension>>();
const quotients = new WeakMap<Dimension, WeakMap<Dimension, Dimension>>();

export function multiplyDimensions(a: Dimension, b: Dimension, power = 1): Dimension {
  if (b === dimensionless) return a;
  const made = power === 1 ? products : power === -1 ? quotients : null;
  if (!made) return multiplied(a, b, power);
  let ofA = made.get(a);
  if (!ofA) made.set(a, (ofA = new WeakMap()));
  let result = ofA.get(b);
  if (!result) ofA.set(b, (result = multiplied(a, b, power)));
  return result;
}

function multiplied(a: Dimension, b: Dimension, power: number): Dimension {
  return [
    tidy(a[0] + power * b[0]),
    tidy(a[1] + power * b[1]),
    tidy(a[2] + power * b[2]),
    tidy(a[3] + power * b[3]),
    tidy(a[4] + power * b[4]),
    tidy(a[5] + power * b[5]),
    tidy(a[6] + power * b[6]),
  ];
}

export function raiseDimension(a: Dimension, power: number): Dimension {
  return multiplyDimensions(dimensionless, a, power);
}

export function sameDimension(a: Dimension, b: Dimension): boolean {
  if (a === b) return true;
  for (let i = 0; i < 7; i++) if (a[i] !== b[i]) return false;
  return true;
}

export function isDimensionless(a: Dimension): boolean {
  return sameDimension(a, dimensionless);
}

export function dimensionKey(a: Dimension): string {
  return a.join(',');
}
