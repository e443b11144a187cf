import { describe, expect, it } from 'vitest';
import { coverageFactor } from '@/lib/quantity/student';
import reference from './gum.json';

// GUM (JCGM 100:2008) table G.2, recomputed with scipy.stats.t.
describe('Student t quantiles', () => {
  const probabilities = { 'p68.27': 0.6827, p90: 0.9, p95: 0.95, 'p95.45': 0.9545, p99: 0.99, 'p99.73': 0.9973 } as const;

  // The recomputed table itself is good to some 3e-9: see the closed forms and the 30-digit values below.
  it('agree with table G.2 at every entry', () => {
    let entries = 0;
    for (const row of reference.t_table.rows) {
      for (const [column, probability] of Object.entries(probabilities)) {
        const expected = row[column as keyof typeof probabilities];
        expect(Math.abs(coverageFactor(probability, row.nu) / expected - 1)).toBeLessThan(5e-9);
        entries++;
      }
    }
    expect(entries).toBeGreaterThan(100);
  });

  it('agree with the closed forms for one and two degrees of freedom', () => {
    for (const p of [0.5, 0.6827, 0.9, 0.9545, 0.9973]) {
      expect(Math.abs(coverageFactor(p, 1) / Math.tan((Math.PI * p) / 2) - 1)).toBeLessThan(1e-12);
      expect(Math.abs(coverageFactor(p, 2) / (p * Math.sqrt(2 / (1 - p * p))) - 1)).toBeLessThan(1e-12);
    }
  });

  it.each([
    // Roots of the regularised incomplete beta function found with mpmath at 30 digits.
    [0.6827, 3, 1.1969125599716932],
    [0.99, 3, 5.8409093097333573],
    [0.9, 4, 2.1318467863266503],
  ])('for P = %f and ν = %i is right to twelve digits', (probability, dof, factor) => {
    expect(Math.abs(coverageFactor(probability, dof) / factor - 1)).toBeLessThan(1e-12);
  });

  it.each([
    // GUM table G.2, last line (infinitely many degrees of freedom), as printed.
    [0.6827, 1.0],
    [0.9, 1.645],
    [0.95, 1.96],
    [0.9545, 2.0],
    [0.99, 2.576],
    [0.9973, 3.0],
  ])('for P = %f and infinite ν is %f', (probability, factor) => {
    expect(Number(coverageFactor(probability, null).toFixed(3))).toBe(factor);
  });

  it('falls from t to normal as ν grows, between whole ν too', () => {
    let before = Infinity;
    for (const dof of [1, 1.5, 2, 2.7, 4, 10, 14.77, 100, 1e4, 1e6, null]) {
      const k = coverageFactor(0.9545, dof);
      expect(k).toBeLessThan(before);
      before = k;
    }
  });
});
