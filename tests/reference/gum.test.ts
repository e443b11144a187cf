import { describe, expect, it } from 'vitest';
import { evaluateSheet } from '@/lib/expression/evaluate';
import type { Sheet, TraceSource, ValueResult } from '@/lib/expression/contract';
import { coverageFactor } from '@/lib/quantity/student';
import reference from './gum.json';
import { cellsOf, traceOf } from '@/lib/expression/example-trace';

type Line = string | [source: string, unit: string];

function calculate(lines: readonly Line[], traces: TraceSource[] = []): (symbol: string) => ValueResult {
  const cells = cellsOf(lines.map((line) => (typeof line === 'string' ? line : line[0]))).map((cell, i) => {
    const line = lines[i];
    return { ...cell, unit: typeof line === 'string' || line === undefined ? null : line[1] };
  });
  const sheet: Sheet = evaluateSheet({ cells, traces });
  return (symbol) => {
    const result = [...sheet.results.values()].find((candidate) => candidate.symbol === symbol);
    if (!result || result.state !== 'ok') throw new Error(`${symbol}: ${result?.error?.message ?? 'no result'}`);
    return result;
  };
}

function example(id: string) {
  const found = reference.examples.find((candidate) => candidate.id === id);
  if (!found) throw new Error(`no example ${id}`);
  return found;
}

// Recomputed values: 1e-9 relative, as far as the inputs' own digits reach.
const close = (actual: number | null | undefined, expected: number, tolerance = 1e-9) => {
  expect(Math.abs((actual ?? NaN) - expected)).toBeLessThanOrEqual(tolerance * Math.abs(expected));
};

const printed = (actual: number | null | undefined, digits: number) => Number((actual ?? NaN).toPrecision(digits));

describe('GUM H.1, end-gauge calibration', () => {
  const { recomputed, published } = example('GUM_H1');
  const result = calculate([
    ['l_S = student(50000623 nm, 25 nm, 18)', 'nm'],
    ['d = 215 nm + student(0 nm, 5.8 nm, 24) + student(0 nm, 3.9 nm, 5) + student(0 nm, 6.7 nm, 8)', 'nm'],
    'alpha_S = rectangular(11.5e-6 1/K, 2e-6 1/K)',
    // 0.2 and 0.35 as printed in H.1.3.4; the arcsine's 0.5/√2 is 0.354.
    'theta = -0.1 K + normal(0 K, 0.2 K, 1) + normal(0 K, 0.35 K, 1)',
    'delta_alpha = student(0 1/K, 5.773502691896258e-7 1/K, 50)',
    'delta_theta = student(0 K, 0.02886751345948129 K, 2)',
    ['l = l_S + d - l_S*(delta_alpha*theta + alpha_S*delta_theta)', 'nm'],
  ]);

  it('gives length, combined uncertainty and degrees of freedom', () => {
    const l = result('l');
    close(l.value, recomputed?.l_nm ?? NaN);
    close(l.u, recomputed?.u_c_nm ?? NaN);
    close(l.dof, recomputed?.nu_eff ?? NaN);
    close(result('d').dof, recomputed?.nu_of_d ?? NaN);
    expect(l.text).toBe('50\u2009000\u2009838(32)\u2009nm');
  });

  it('gives the published figures to their printed digits', () => {
    expect(printed(result('l').u, 2)).toBe(published?.u_c_nm);
    expect(Math.floor(result('l').dof ?? NaN)).toBe(published?.nu_eff);
    expect(printed(coverageFactor(0.99, 16), 3)).toBe(published?.k99);
    expect(Math.round(coverageFactor(0.99, 16) * 32)).toBe(published?.U99_nm);
  });

  it('lists each contribution in the budget', () => {
    const budget = result('l').budget;
    const of = (input: string) => budget.find((line) => line.input === input)?.contribution;
    close(of('l_S'), 25);
    close(of('delta_alpha'), 2.8867873148699);
    close(of('delta_theta'), 16.599027060501925);
    expect(of('alpha_S')).toBe(0);
    // Largest first.
    expect(budget[0]?.input).toBe('l_S');
  });
});

describe('GUM H.2, simultaneous resistance and reactance', () => {
  const { observations, published, recomputed_approach_1: recomputed } = example('GUM_H2');
  const trace = traceOf('t1', [
    { symbol: 'V', unit: 'V', samples: observations?.V_volt ?? [] },
    { symbol: 'I', unit: 'A', samples: observations?.I_ampere ?? [] },
    { symbol: 'phi', unit: 'rad', samples: observations?.phi_rad ?? [] },
  ]);
  const result = calculate(
    [
      'V = mean(t1.V)',
      'I = mean(t1.I)',
      'phi = mean(t1.phi)',
      ['R = V/I*cos(phi)', 'ohm'],
      ['X = V/I*sin(phi)', 'ohm'],
      ['Z = V/I', 'ohm'],
      ['RX = R + X', 'ohm'],
      ['RZ = R + Z', 'ohm'],
      ['XZ = X + Z', 'ohm'],
    ],
    [trace],
  );

  it('gives the means of the observations with s/√n and four degrees of freedom', () => {
    close(result('V').value, recomputed?.inputs_mean[0] ?? NaN);
    close(result('V').u, recomputed?.inputs_u[0] ?? NaN);
    expect(result('V').dof).toBe(4);
    close(result('phi').u, recomputed?.inputs_u[2] ?? NaN);
    expect(result('V').budget[0]?.note).toContain('5 samples, s/√n');
  });

  it('propagates with the correlation of the inputs', () => {
    ['R', 'X', 'Z'].forEach((symbol, i) => {
      close(result(symbol).value, recomputed?.y[i] ?? NaN);
      close(result(symbol).u, recomputed?.u[i] ?? NaN);
      expect(result(symbol).dof).toBe(4);
    });
    expect(printed(result('R').value, 6)).toBe(published?.R);
    expect(printed(result('R').u, 2)).toBe(published?.u_R);
    // The standard prints 0.295 from rounded intermediate values; unrounded it is 0.2956.
    expect(Math.abs((result('X').u ?? NaN) - (published?.u_X as number))).toBeLessThan(0.001);
    expect(printed(result('Z').u, 3)).toBe(published?.u_Z);
  });

  it('keeps the correlation of the outputs', () => {
    const r = (a: string, b: string) => {
      const [x, y, both] = [result(a).u ?? NaN, result(b).u ?? NaN, result(a + b).u ?? NaN];
      return (both * both - x * x - y * y) / (2 * x * y);
    };
    close(r('R', 'X'), recomputed?.r[0]?.[1] ?? NaN, 1e-8);
    close(r('R', 'Z'), recomputed?.r[0]?.[2] ?? NaN, 1e-8);
    close(r('X', 'Z'), recomputed?.r[1]?.[2] ?? NaN, 1e-8);
    expect(printed(r('R', 'X'), 3)).toBe(published?.r_RX);
    expect(printed(r('R', 'Z'), 3)).toBe(published?.r_RZ);
    expect(printed(r('X', 'Z'), 3)).toBe(published?.r_XZ);
  });

  it('is the same when the impedance is taken row by row (approach 2)', () => {
    const other = example('GUM_H2').recomputed_approach_2;
    const rows = calculate(['t1.R = t1.V/t1.I*cos(t1.phi)', ['R = mean(t1.R)', 'ohm']], [trace]);
    close(rows('R').value, other?.y[0] ?? NaN);
    close(rows('R').u, other?.u[0] ?? NaN);
  });
});

describe('GUM G.4.1, effective degrees of freedom', () => {
  const { recomputed, published } = example('GUM_G4.1_example');
  it('gives ν_eff and the expanded uncertainty of a product', () => {
    const result = calculate([
      'x_1 = student(1, 0.0025, 9)',
      'x_2 = student(1, 0.0057, 4)',
      'x_3 = student(1, 0.0082, 14)',
      'y = x_1*x_2*x_3',
    ]);
    close(result('y').u, (recomputed?.u_percent ?? NaN) / 100);
    close(result('y').dof, recomputed?.nu_eff ?? NaN);
    expect(printed(result('y').dof, 3)).toBe(published?.nu_eff);
  });
});

describe('pump current through a reference resistor (invented inputs)', () => {
  const { expected } = example('pump_current_budget');
  const result = calculate([
    'f = 600 MHz exactly',
    'V = student(0.0961318 V, 41 nV, 30)',
    'V_off = student(1.2 µV, 80 nV, 9)',
    'R = 1000000120 ohm ± 120 ohm',
    'g = rectangular(0, 5e-8)',
    'd = triangular(0, 2e-7)',
    ['I = (V - V_off)/R*(1 + g + d)', 'A'],
    ['delta = I/(e*f) - 1', 'ppm'],
  ]);

  it('gives the current, its uncertainty, ν_eff and U at 95.45 %', () => {
    const I = result('I');
    close(I.value, expected?.I_A ?? NaN);
    close(I.u, expected?.u_I_A ?? NaN);
    close(I.dof, expected?.nu_eff ?? NaN);
    close(I.k, expected?.['k95.45'] ?? NaN);
    close(I.expanded, expected?.U_A ?? NaN);
    expect(I.coverage).toBe(0.9545);
  });

  it('gives each sensitivity and contribution', () => {
    ['V', 'V_off', 'R', 'g', 'd'].forEach((input, i) => {
      const line = result('I').budget.find((candidate) => candidate.input === input);
      close(line?.sensitivity, expected?.sensitivities?.[i] ?? NaN);
      close(line?.contribution, expected?.contributions_A?.[i] ?? NaN);
    });
  });

  it('gives the deviation from e f in ppm', () => {
    // The deviation is a difference of nearly equal numbers: 1e-16 of 1 is 1e-9 of 0.1 ppm.
    close(result('delta').value, expected?.delta_ppm ?? NaN, 5e-9);
    close(result('delta').u, expected?.u_delta_ppm ?? NaN);
  });
});
