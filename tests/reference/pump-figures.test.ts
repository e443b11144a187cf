import { describe, expect, it } from 'vitest';
import { evaluateSheet } from '@/lib/expression/evaluate';
import published from './published-figures.json';
import { cellsOf } from '@/lib/expression/example-trace';

// Published pump currents as quoted and rounded; references and whether they were read stand in published-figures.json.
describe('published pump currents', () => {
  it('e f agrees with each published operating point', () => {
    const lines = published.figures.map(({ f_Hz, n }, i) => `I_${i} = ${n}*e*(${f_Hz / 1e6} MHz)`);
    const sheet = evaluateSheet({ cells: cellsOf(lines).map((cell) => ({ ...cell, unit: 'pA' })), traces: [] });
    expect(published.figures.length).toBeGreaterThanOrEqual(6);
    published.figures.forEach(({ e_f_pA, n }, i) => {
      const quoted = Number(e_f_pA) * n;
      // The file prints ten digits.
      expect(Math.abs((sheet.results.get(`c${i}`)?.value ?? NaN) / quoted - 1)).toBeLessThan(1e-9);
    });
  });

  it.each([
    // Stein et al., Appl. Phys. Lett. 107, 103501 (2015): 87 pA at 545 MHz.
    ['545 MHz', 2, 87],
    // Giblin et al., Nat. Commun. 3, 930 (2012): up to 150 pA at 945 MHz.
    ['945 MHz', 2, 150],
    // Yamahata et al., Appl. Phys. Lett. 109, 013101 (2016), from memory: 160 pA at 1 GHz.
    ['1 GHz', 2, 160],
  ])('at %s rounds to %i digits as quoted: %f pA', (f, digits, quoted) => {
    const cells = [{ id: 'y', source: `y = e*(${f})`, unit: 'pA', digits: null }];
    const value = evaluateSheet({ cells, traces: [] }).results.get('y')?.value ?? NaN;
    expect(Number(value.toPrecision(digits))).toBe(quoted);
  });
});
