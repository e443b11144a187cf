import { describe, expect, it } from 'vitest';
import { constants } from '@/lib/constants/constants';
import { evaluateSheet } from '@/lib/expression/evaluate';
import reference from './constants.json';
import { cellsOf } from '@/lib/expression/example-trace';

function value(source: string, unit: string | null = null): number {
  const sheet = evaluateSheet({ cells: [{ id: 'y', source, unit, digits: null }], traces: [] });
  const result = sheet.results.get('y');
  if (!result || result.value === null) throw new Error(result?.error?.message ?? 'no result');
  return result.value;
}

const relative = (a: number, b: number) => Math.abs(a / b - 1);

// Exact constants: SI Brochure, 9th edition (2019), table 1.
describe('exact constants', () => {
  it.each([
    ['e', reference.exact.e.value],
    ['h', reference.exact.h.value],
    ['k_B', reference.exact.k_B.value],
    ['c_0', reference.exact.c.value],
  ])('%s is the double nearest to its definition', (symbol, defined) => {
    expect(constants.get(symbol)?.value).toBe(Number(defined));
  });

  // CODATA 2022, derived exactly from the definitions; 15 digits from mpmath.
  it.each([
    ['hbar', 'y = hbar', 'J s', reference.derived.hbar.value],
    ['Josephson constant', 'y = 2*e/h', 'Hz/V', reference.derived.K_J.value],
    ['von Klitzing constant', 'y = h/e^2', 'ohm', reference.derived.R_K.value],
    ['conductance quantum', 'y = 2*e^2/h', 'S', reference.derived.G_0.value],
    ['flux quantum', 'y = h/(2*e)', 'Wb', reference.derived.Phi_0.value],
    ['k_B/e', 'y = k_B/e', 'V/K', reference.derived.k_B_over_e.value],
    ['thermal voltage at 300 K', 'y = k_B*(300 K)/e', 'V', reference.derived.thermal_voltage_300K.value],
    ['k_B T at 4.2 K', 'y = k_B*(4.2 K)', 'meV', reference.derived['kT_meV_4.2K'].value],
    ['electronvolt as a frequency', 'y = (1 eV)/h/(1 V)', 'Hz/V', reference.derived.eV_over_h.value],
  ])('%s comes out of its definition', (_, source, unit, defined) => {
    expect(relative(value(source, unit), Number(defined))).toBeLessThan(1e-14);
  });

  it('knows every constant with its source', () => {
    for (const constant of constants.values()) expect(constant.source).toContain('SI Brochure');
  });
});

describe('n e f', () => {
  it('agrees with the table at every frequency', () => {
    const lines = reference.e_times_f.map(({ f_Hz, n }, i) => `I_${i} = ${n}*e*(${f_Hz} Hz)`);
    const sheet = evaluateSheet({ cells: cellsOf(lines).map((cell) => ({ ...cell, unit: 'A' })), traces: [] });
    expect(reference.e_times_f.length).toBeGreaterThan(30);
    reference.e_times_f.forEach(({ I_A }, i) => {
      expect(relative(sheet.results.get(`c${i}`)?.value ?? NaN, Number(I_A))).toBeLessThan(4e-16);
    });
  });

  it('gives 160.217 663 4 pA per electron at 1 GHz', () => {
    const sheet = evaluateSheet({ cells: cellsOf(['f = 1 GHz exactly', 'I = e*f']), traces: [] });
    expect(sheet.results.get('c1')?.text).toBe('160.217\u2009663\u20094\u2009pA');
  });
});
