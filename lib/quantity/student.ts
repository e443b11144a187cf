/**
 * Student's t and normal coverage factors. P(|T| ≤ t) = 1 − I_x(ν/2, 1/2) with x = ν/(ν + t²)
 * (Abramowitz and Stegun 26.7.1); the incomplete beta function by its continued fraction (26.5.8, Lentz's method);
 * solved by Newton's method. Checked against GUM table G.2.
 */

const lanczos = [
  0.99999999999980993, 676.5203681218851, -1259.1392167224028, 771.32342877765313, -176.61502916214059,
  12.507343278686905, -0.13857109526572012, 9.9843695780195716e-6, 1.5056327351493116e-7,
];

/** ln Γ(x) for x > 0, Lanczos' approximation with g = 7 and nine terms. */
export function logGamma(x: number): number {
  if (x < 0.5) return Math.log(Math.PI / Math.sin(Math.PI * x)) - logGamma(1 - x);
  let sum = lanczos[0] ?? 0;
  for (let i = 1; i < 9; i++) sum += (lanczos[i] ?? 0) / (x - 1 + i);
  const t = x + 6.5;
  return 0.5 * Math.log(2 * Math.PI) + (x - 0.5) * Math.log(t) - t + Math.log(sum);
}

/** Regularised incomplete beta function I_x(a, b). */
export function incompleteBeta(x: number, a: number, b: number): number {
  if (x <= 0) return 0;
  if (x >= 1) return 1;
  const front = Math.exp(logGamma(a + b) - logGamma(a) - logGamma(b) + a * Math.log(x) + b * Math.log1p(-x));
  return x < (a + 1) / (a + b + 2) ? (front * fraction(x, a, b)) / a : 1 - (front * fraction(1 - x, b, a)) / b;
}

/** Keeps Lentz's method from dividing by zero. */
function away(value: number): number {
  return Math.abs(value) < 1e-300 ? 1e-300 : value;
}

function fraction(x: number, a: number, b: number): number {
  let c = 1;
  let d = 1 / away(1 - ((a + b) * x) / (a + 1));
  let result = d;
  for (let m = 1; m <= 500; m++) {
    const even = (m * (b - m) * x) / ((a + 2 * m - 1) * (a + 2 * m));
    d = 1 / away(1 + even * d);
    c = away(1 + even / c);
    result *= d * c;
    const odd = (-(a + m) * (a + b + m) * x) / ((a + 2 * m) * (a + 2 * m + 1));
    d = 1 / away(1 + odd * d);
    c = away(1 + odd / c);
    result *= d * c;
    if (Math.abs(d * c - 1) < 1e-16) break;
  }
  return result;
}

/** Beyond this many degrees of freedom t and the normal distribution agree to better than 1e-7. */
const asGoodAsNormal = 1e7;

/** From here on the expansion in 1/ν has all the digits of a double that matter. */
const manyDegrees = 1000;

/** By probability, then by degrees of freedom; numbers as keys, since writing them out costs more than the search. */
const known = new Map<number, Map<number, number>>();
const knownNormal = new Map<number, number>();

/** t_p(ν): half-width of the interval, in standard uncertainties, that covers `probability`; ν ≥ 1, null for infinite. */
export function coverageFactor(probability: number, dof: number | null): number {
  if (dof === null || dof > asGoodAsNormal) return normalCoverageFactor(probability);
  let byDof = known.get(probability);
  if (!byDof) {
    if (known.size > 50) known.clear();
    byDof = new Map();
    known.set(probability, byDof);
  }
  const found = byDof.get(dof);
  if (found !== undefined) return found;
  const t = solveStudent(probability, dof);
  if (byDof.size > 5000) byDof.clear();
  byDof.set(dof, t);
  return t;
}

function solveStudent(probability: number, dof: number): number {
  // The next term of the expansion is below 1e-13 of t there.
  if (dof >= manyDegrees) return expansion(normalCoverageFactor(probability), dof);
  const norm = Math.exp(logGamma((dof + 1) / 2) - logGamma(dof / 2)) / Math.sqrt(dof * Math.PI);
  // 1 − P is convex for t > 0, so Newton's steps from the left approach the root without overshooting; for more than a
  // few degrees of freedom the expansion starts them within a step or two of it.
  let t = dof < 10 ? normalCoverageFactor(probability) : expansion(normalCoverageFactor(probability), dof);
  for (let step = 0; step < 200; step++) {
    const tail = incompleteBeta(dof / (dof + t * t), dof / 2, 0.5) - (1 - probability);
    const density = norm * Math.pow(1 + (t * t) / dof, -(dof + 1) / 2);
    const move = tail / (2 * density);
    t += move;
    // The error after a step is of the order of its square.
    if (Math.abs(move) <= 1e-9 * t) break;
  }
  return t;
}

/** t in powers of 1/ν (Abramowitz and Stegun 26.7.5). */
function expansion(z: number, dof: number): number {
  const s = z * z;
  const g1 = (z * (s + 1)) / 4;
  const g2 = (z * ((5 * s + 16) * s + 3)) / 96;
  const g3 = (z * (((3 * s + 19) * s + 17) * s - 15)) / 384;
  const g4 = (z * ((((79 * s + 776) * s + 1482) * s - 1920) * s - 945)) / 92160;
  return z + (g1 + (g2 + (g3 + g4 / dof) / dof) / dof) / dof;
}

/** z with erf(z/√2) = probability. */
export function normalCoverageFactor(probability: number): number {
  const found = knownNormal.get(probability);
  if (found !== undefined) return found;
  let z = probability * Math.sqrt(Math.PI / 2);
  for (let step = 0; step < 200; step++) {
    const move = (probability - centralProbability(z)) / ((2 * Math.exp((-z * z) / 2)) / Math.sqrt(2 * Math.PI));
    z += move;
    if (Math.abs(move) <= 1e-9 * z) break;
  }
  knownNormal.set(probability, z);
  return z;
}

/** P(|Z| ≤ z) = √(2/π) e^(−z²/2) Σ z^(2n+1)/(1·3·…·(2n+1)). Abramowitz and Stegun 26.2.11. */
function centralProbability(z: number): number {
  let term = z;
  let sum = z;
  for (let n = 1; n < 500 && term > 1e-17 * sum; n++) {
    term *= (z * z) / (2 * n + 1);
    sum += term;
  }
  return Math.sqrt(2 / Math.PI) * Math.exp((-z * z) / 2) * sum;
}
