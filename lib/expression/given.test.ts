import { describe, expect, it } from 'vitest';
import { cellsOf } from './example-trace';
import type { GivenQuantity } from './contract';
import { evaluateSheet } from './evaluate';

const tau: GivenQuantity = {
  name: 'esc1.tau',
  label: 'tau of esc1',
  value: 1.5,
  unit: 'µs',
  u: 0.03,
  dof: 20,
  type: 'A',
  note: null,
  group: 'esc1',
  correlation: { 'esc1.S_0': -0.5 },
};
const start: GivenQuantity = {
  ...tau,
  name: 'esc1.S_0',
  label: 'S_0 of esc1',
  value: 0.9,
  unit: '1',
  u: 0.01,
  correlation: { 'esc1.tau': -0.5 },
};

describe('quantities given from elsewhere', () => {
  it('are named with a point, with their uncertainty and their group', () => {
    const sheet = evaluateSheet({
      cells: cellsOf(['rate = 1/esc1.tau', 'p = esc1.S_0*esc1.tau', 'z = esc1.tau - esc1.tau']),
      traces: [],
      given: [tau, start],
    });
    expect(sheet.results.get('c0')).toMatchObject({ state: 'ok', dof: 20, dependsOn: ['esc1.tau'] });
    expect(sheet.results.get('c0')?.budget[0]?.input).toBe('tau of esc1');
    // Relative: 2 % and 1.11 %, correlated by −0.5 (GUM 5.2.2).
    const relative = Math.sqrt(0.02 ** 2 + (0.01 / 0.9) ** 2 - 0.02 * (0.01 / 0.9));
    const p = sheet.results.get('c1');
    expect(Math.abs((p?.u ?? NaN) / (p?.value ?? 1) / relative - 1)).toBeLessThan(1e-12);
    // One fit is one group with its ν.
    expect(p?.dof).toBeCloseTo(20, 9);
    expect(sheet.results.get('c2')).toMatchObject({ value: 0, u: 0 });
  });

  it('carry a fit to another point: GUM H.3.4, correction of a thermometer at 30 °C', () => {
    // JCGM 100:2008 H.3: y_1 = −0.1712 °C, s 0.0029; y_2 = 0.00218, s 0.00067; r = −0.930; b(30) = −0.1494(41), ν = 9.
    const line = (name: string, value: number, u: number, other: string): GivenQuantity => ({
      ...tau,
      name: `fit.${name}`,
      label: name,
      value,
      u,
      unit: name === 'y_1' ? 'K' : '1',
      dof: 9,
      group: 'fit',
      correlation: { [`fit.${other}`]: -0.930429603093446 },
    });
    const given = [
      line('y_1', -0.17120379013134981, 0.002877597835159956, 'y_2'),
      line('y_2', 0.0021826977398872426, 0.0006679387732278322, 'y_1'),
    ];
    const cells = [{ id: 'b', source: 'b = fit.y_1 + fit.y_2*(30 K - 20 K)', unit: 'K', digits: null }];
    const b = evaluateSheet({ cells, traces: [], given }).results.get('b');
    expect(b?.value?.toFixed(4)).toBe('-0.1494');
    expect(b?.u?.toFixed(4)).toBe('0.0041');
    expect(Math.abs((b?.u ?? NaN) / 0.00413859575285495 - 1)).toBeLessThan(1e-9);
    expect(b?.dof).toBeCloseTo(9, 9);
  });

  it('follow their source from sheet to sheet, and are refused where they have no value', () => {
    const cells = cellsOf(['rate = 1/esc1.tau', 'x = 2']);
    const first = evaluateSheet({ cells, traces: [], given: [tau] });
    expect(evaluateSheet({ cells, traces: [], given: [{ ...tau }] }, first).results.get('c0')).toBe(
      first.results.get('c0'),
    );
    const changed = evaluateSheet({ cells, traces: [], given: [{ ...tau, value: 3 }] }, first);
    expect(changed.results.get('c0')?.value).toBeCloseTo((first.results.get('c0')?.value ?? NaN) / 2, 6);
    expect(evaluateSheet({ cells, traces: [], given: [] }, first).results.get('c0')?.error?.code).toBe('unknown-name');
    expect(evaluateSheet({ cells, traces: [], given: [{ ...tau, value: NaN }] }).results.get('c0')?.error?.code).toBe(
      'no-data',
    );
  });
});
