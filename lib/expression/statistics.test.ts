import { describe, expect, it } from 'vitest';
import { autoregressive, noise } from '@/lib/quantity/example-noise';
import { calculate, cellsOf, traceOf } from './example-trace';
import type { ValueResult } from './contract';
import { evaluateSheet } from './evaluate';

const n = 4000;
const seconds = Float64Array.from({ length: n }, (_, i) => i / 10);

describe('statistics', () => {
  it('of two columns over the same rows carry their correlation (GUM 5.2.3)', () => {
    const { normal } = noise(11);
    const common = Float64Array.from({ length: 2000 }, () => normal());
    const trace = traceOf('t1', [
      { symbol: 'x', unit: 'V', samples: common.map((c) => c + 0.5 * normal()) },
      { symbol: 'y', unit: 'V', samples: common.map((c) => c + 0.5 * normal()) },
    ]);
    const { of } = calculate(
      ['a = mean(t1.x)', 'b = mean(t1.y)', 'd = a - b', 's = a + b', 't1.d = t1.x - t1.y', 'm = mean(t1.d)'],
      [trace],
    );
    // The mean of the differences knows nothing of correlation and has to give the same u.
    expect(Math.abs((of('d').u ?? NaN) / (of('m').u ?? 1) - 1)).toBeLessThan(1e-9);
    expect(of('s').u).toBeGreaterThan(2.5 * (of('d').u ?? Infinity));
    expect(of('d').dof).toBeCloseTo(1999, 6);
  });

  it('over overlapping rows are correlated, and no ν_eff is claimed', () => {
    const trace = traceOf(
      't1',
      [
        { symbol: 't', unit: 's', samples: seconds },
        { symbol: 'I', unit: 'A', samples: autoregressive(n, 0, 3) },
      ],
      {
        spans: [
          { name: 'all', axis: 't', intervals: [[0, 400]] },
          { name: 'half', axis: 't', intervals: [[0, 199.95]] },
        ],
      },
    );
    const { of } = calculate(['d = mean(t1.I, all) - mean(t1.I, half)', 'U = expanded(d)'], [trace]);
    // Of n samples and the first n/2 of them: u² = σ²(1/n + 2/n − 2/n) = σ²/n.
    expect(of('d').unit).toBe('mA');
    expect(Math.abs((of('d').u ?? NaN) / (1e3 / Math.sqrt(n)) - 1)).toBeLessThan(0.05);
    expect(of('d')).toMatchObject({ dof: null, k: null, expanded: null });
    expect(of('d').warnings[0]).toContain('no effective degrees of freedom');
    expect(of('U').error?.code).toBe('correlated-dof');
  });

  it('of one file are the same input under whatever span, trace or symbol', () => {
    const samples = Float64Array.from(autoregressive(100, 0, 2));
    const columns = [
      { symbol: 't', unit: 's', samples: Float64Array.from({ length: 100 }, (_, i) => i) },
      { symbol: 'I', unit: 'A', samples },
    ];
    const spans = [{ name: 'all', axis: 't', intervals: [[0, 99] as [number, number]] }];
    const traces = [
      traceOf('t1', columns, { spans, digest: 'one file' }),
      traceOf('t2', columns, { spans, digest: 'one file' }),
    ];
    const { of } = calculate(
      ['a = mean(t1.I) - mean(t1.I, all)', 'b = mean(t1.I) - mean(t2.I)', 's = mean(t1.I) + mean(t1.I, all)'],
      traces,
    );
    expect(of('a')).toMatchObject({ value: 0, u: 0 });
    expect(of('b').u).toBe(0);
    expect(of('s').dof).toBeCloseTo(99, 9);
  });

  it('warn of drift, of too short a trace and of no scatter', () => {
    const warnings = (samples: Float64Array) =>
      calculate(['x = mean(t1.I)'], [traceOf('t1', [{ symbol: 'I', unit: 'A', samples }])]).of('x').warnings;
    expect(warnings(autoregressive(500, 0, 4).map((x, i) => x + i / 50))[0]).toContain('drifts');
    const told = Array.from({ length: 20 }, (_, seed) => warnings(autoregressive(200, 0.98, seed))[0] ?? '');
    expect(told.filter((sentence) => /too short|drifts/.test(sentence)).length).toBeGreaterThan(14);
    expect(warnings(new Float64Array(100).fill(2))[0]).toContain('all samples are equal');
    expect(warnings(autoregressive(500, 0.5, 6))).toEqual([]);
  });

  it('sd, median, slope and integral have values and uncertainties that hold over many series', () => {
    const trials = 400;
    const misses = { s: 0, m: 0, b: 0, q: 0 };
    for (let seed = 1; seed <= trials; seed++) {
      const { normal } = noise(seed);
      const samples = Float64Array.from({ length: 200 }, (_, i) => 3 + 0.02 * i + normal());
      const flat = Float64Array.from({ length: 200 }, () => 3 + normal());
      const trace = traceOf('t1', [
        { symbol: 'x', unit: 's', samples: Array.from({ length: 200 }, (_, i) => i) },
        { symbol: 'y', unit: 'V', samples },
        { symbol: 'z', unit: 'V', samples: flat },
      ]);
      const cells = cellsOf([
        's = sd(t1.z)',
        'm = median(t1.z)',
        'b = slope(t1.y, t1.x)',
        'q = integral(t1.y, t1.x)',
      ]).map((cell, i) => ({
        ...cell,
        unit: ['V', 'V', 'V/s', 'V s'][i] ?? null,
      }));
      const results = evaluateSheet({ cells, traces: [trace] }).results;
      const truth = { s: 1, m: 3, b: 0.02, q: 3 * 199 + (0.02 * 199 * 199) / 2 };
      (Object.keys(truth) as (keyof typeof truth)[]).forEach((symbol, i) => {
        const { value, expanded } = results.get(`c${i}`) as ValueResult;
        if (Math.abs((value ?? NaN) - truth[symbol]) > (expanded ?? 0)) misses[symbol]++;
      });
    }
    // 4.55 % of 400 is 18, binomial standard deviation 4.2; the median's u is asymptotic.
    for (const [symbol, count] of Object.entries(misses)) {
      expect(count, symbol).toBeGreaterThan(3);
      expect(count, symbol).toBeLessThan(36);
    }
  });

  it('take their shared inputs along', () => {
    const trace = traceOf('t1', [
      { symbol: 'x', unit: 's', samples: [0, 1, 2, 3] },
      { symbol: 'y', unit: 'V', samples: [1, 3, 5, 7], gain: { text: '2.00(2)', source: '' } },
    ]);
    const { of } = calculate(
      ['b = slope(t1.y, t1.x)', 'q = integral(t1.y, t1.x)', 's = sd(t1.y)', 'm = median(t1.y)'],
      [trace],
    );
    // Every one of them is inversely proportional to the gain: 1 %.
    for (const symbol of ['b', 'q', 's', 'm']) {
      const { value, budget } = of(symbol);
      const gain = budget.find(({ input }) => input.startsWith('gain'));
      expect(Math.abs((gain?.contribution ?? NaN) / (value ?? 1) - 0.01), symbol).toBeLessThan(1e-9);
    }
    expect(of('b').value).toBeCloseTo(1, 12);
    expect(of('q').value).toBeCloseTo(6, 12);
  });
});
