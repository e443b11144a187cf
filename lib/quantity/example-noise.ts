/** Seeded uniform numbers in [0, 1) (mulberry32, public domain) and normal ones by the Box-Muller transform. */
export function noise(seed: number): { uniform: () => number; normal: () => number } {
  let state = seed | 0;
  const uniform = () => {
    state = (state + 0x6d2b79f5) | 0;
    let t = Math.imul(state ^ (state >>> 15), 1 | state);
    t = (t + Math.imul(t ^ (t >>> 7), 61 | t)) ^ t;
    return ((t ^ (t >>> 14)) >>> 0) / 4294967296;
  };
  const normal = () => Math.sqrt(-2 * Math.log(1 - uniform())) * Math.cos(2 * Math.PI * uniform());
  return { uniform, normal };
}

/** Autoregressive noise of unit variance, x_i = φ x_{i−1} + √(1 − φ²) ε_i: the mean has u² ≈ (1 + φ)/((1 − φ) n). */
export function autoregressive(n: number, phi: number, seed: number): Float64Array {
  const { normal } = noise(seed);
  const result = new Float64Array(n);
  let x = normal();
  for (let i = 0; i < n; i++) {
    result[i] = x;
    x = phi * x + Math.sqrt(1 - phi * phi) * normal();
  }
  return result;
}
