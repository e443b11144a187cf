import { describe, expect, it } from 'vitest';
import { autoregressive, noise } from './example-noise';
import { blockedCorrelation, blockedMean, drift, mean } from './blocking';
import { incompleteGammaQ } from './gamma';
import { coverageFactor } from './student';

/**
 * Limits of a count that is binomial with probability p: five standard deviations, which a right method leaves less
 * often than once in a million runs (the seeds are fixed, so this does not happen by chance from run to run).
 */
const within = (count: number, trials: number, p: number, sigmas = 5) =>
  Math.abs(count - trials * p) <= sigmas * Math.sqrt(trials * p * (1 - p));

function coverageOf(n: number, phi: number, trials: number) {
  let covered = 0;
  let ratio = 0;
  const expected = Math.sqrt((1 + phi) / (1 - phi) / n);
  for (let seed = 1; seed <= trials; seed++) {
    const found = blockedMean(autoregressive(n, phi, seed));
    if (Math.abs(found.mean) <= coverageFactor(0.9545, found.dof) * found.u) covered++;
    ratio += found.u / expected / trials;
  }
  return { covered, ratio };
}

describe('mean of correlated samples (Flyvbjerg and Petersen, 1989)', () => {
  it('gives s/√n of white noise', () => {
    const { ratio } = coverageOf(1000, 0, 500);
    expect(Math.abs(ratio - 1)).toBeLessThan(0.02);
    const one = blockedMean(autoregressive(1000, 0, 7));
    expect(Math.abs(one.u / (one.s / Math.sqrt(1000)) - 1)).toBeLessThan(1e-14);
    expect(one.dof).toBe(999);
    expect(one.effective).toBeCloseTo(1000, 9);
  });

  // Exact variance of the mean of an AR(1) process: Priestley, Spectral Analysis and Time Series (1981), 5.3.
  it.each([
    [1000, 0.6, 0.06],
    [4000, 0.9, 0.07],
  ])('finds u of autoregressive noise, n = %i, φ = %f', (n, phi, tolerance) => {
    const { ratio } = coverageOf(n, phi, 300);
    expect(Math.abs(ratio - 1)).toBeLessThan(tolerance);
  });

  it('covers the truth as often as stated for white noise, short and long', () => {
    const trials = 2000;
    for (const n of [24, 200]) expect(within(coverageOf(n, 0, trials).covered, trials, 0.9545)).toBe(true);
  });

  it('covers the truth nearly as often where the noise is correlated', () => {
    const trials = 1000;
    // Finite blocks leave some correlation: up to 3 % fewer intervals contain the truth. s/√n would contain it in
    // 66 % (φ = 0.6) and 35 % (φ = 0.9) of cases.
    for (const [n, phi] of [
      [1000, 0.6],
      [4000, 0.9],
    ] as const) {
      const { covered } = coverageOf(n, phi, trials);
      expect(covered / trials).toBeGreaterThan(0.92);
      expect(covered / trials).toBeLessThan(0.98);
    }
  });

  it('says where a series is too short for its correlation', () => {
    let told = 0;
    for (let seed = 1; seed <= 100; seed++) if (blockedMean(autoregressive(200, 0.98, seed)).short) told++;
    expect(told).toBeGreaterThan(80);
    let wrongly = 0;
    for (let seed = 1; seed <= 1000; seed++) if (blockedMean(autoregressive(500, 0, seed)).short) wrongly++;
    expect(wrongly).toBeLessThan(10);
  });

  it('falls back on s/√n with n − 1 for fewer than 16 samples', () => {
    const found = blockedMean(Float64Array.from([5.007, 4.994, 5.005, 4.99, 4.999]));
    expect(found.few).toBe(true);
    expect(found.dof).toBe(4);
    // GUM H.2.1: V = 4.9990 V, u(V) = 0.0032 V.
    expect(Number(found.u.toFixed(4))).toBe(0.0032);
  });

  it('has no scatter where all samples are equal', () => {
    const found = blockedMean(new Float64Array(100).fill(3.7));
    expect(found.u).toBe(0);
    expect(found.mean).toBe(3.7);
  });

  it('loses no digits over a large constant', () => {
    const { normal } = noise(3);
    const scatter = Float64Array.from({ length: 4096 }, () => normal());
    const lifted = scatter.map((x) => x * 1e-6 + 1e3);
    expect(Math.abs(blockedMean(lifted).u / (blockedMean(scatter).u * 1e-6) - 1)).toBeLessThan(1e-5);
    expect(mean(new Float64Array(1e5).fill(0.1))).toBe(0.1);
  });
});

describe('drift', () => {
  it('is found where a line rises by more than the noise allows, and rarely else', () => {
    const { normal } = noise(5);
    const rising = Float64Array.from({ length: 1000 }, (_, i) => normal() + i * 2e-3);
    expect(drift(rising).significant).toBe(true);
    expect(Math.abs(drift(rising).change - 2)).toBeLessThan(0.6);
    let wrongly = 0;
    for (let seed = 1; seed <= 500; seed++) if (drift(autoregressive(500, 0.5, seed)).significant) wrongly++;
    expect(wrongly).toBeLessThan(10);
  });
});

describe('correlation of two series', () => {
  it('is that of common noise', () => {
    const [a, b, c] = [autoregressive(20000, 0, 1), autoregressive(20000, 0, 2), autoregressive(20000, 0, 3)];
    const x = a.map((v, i) => v + c[i]);
    const y = b.map((v, i) => v + c[i]);
    // Cov = 1, variances 2: r = 1/2, standard error (1 − r²)/√n = 0.005.
    expect(Math.abs(blockedCorrelation(x, y, 1) - 0.5)).toBeLessThan(0.025);
    expect(blockedCorrelation(x, x, 1)).toBeCloseTo(1, 12);
    expect(
      blockedCorrelation(
        x,
        x.map((v) => -v),
        1,
      ),
    ).toBeCloseTo(-1, 12);
    expect(blockedCorrelation(x, new Float64Array(20000).fill(2), 1)).toBe(0);
  });
});

describe('χ² tail', () => {
  // Abramowitz and Stegun, table 26.8: χ² exceeded with probability 0.05 and 0.01.
  it.each([
    [1, 3.84146, 0.05],
    [5, 11.0705, 0.05],
    [10, 18.307, 0.05],
    [1, 6.6349, 0.01],
    [10, 23.2093, 0.01],
  ])('ν = %i, χ² = %f has probability %f', (nu, chi2, probability) => {
    expect(Math.abs(incompleteGammaQ(nu / 2, chi2 / 2) - probability)).toBeLessThan(1e-6);
  });
});
