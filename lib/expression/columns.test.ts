import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { noise } from '@/lib/quantity/example-noise';
import { calculate, cellsOf, traceOf, type GivenColumn } from './example-trace';
import { spanRows } from './columns';
import type { RawColumn, TraceSource } from './contract';
import { evaluateSheet } from './evaluate';
import { readColumn } from './read-column';

const thin = '\u2009';
const e = 1.602176634e-19;

const n = 4000;
const seconds = Float64Array.from({ length: n }, (_, i) => i / 10);

/** On for the first half of every 40 s, in mV behind an amplifier of 1e9 V/A: 29.5 fA on, 0.1 fA off, 1 fA of noise. */
function onOff(
  handle: string,
  seed: number,
  more: Partial<GivenColumn> = {},
  sign: 'as recorded' | 'reversed' | null = null,
) {
  const { normal } = noise(seed);
  const samples = seconds.map((t) => (t % 40 < 20 ? 0.0295 : 0.0001) + 1e-3 * normal());
  const intervals = (from: number, to: number) =>
    Array.from({ length: 10 }, (_, i): [number, number] => [40 * i + from, 40 * i + to]);
  return traceOf(
    handle,
    [
      { symbol: 't', unit: 's', samples: seconds },
      { symbol: 'I', unit: 'mV', samples, gain: { text: '1e9 V/A ± 50 ppm', source: 'CAL-0181' }, ...more },
    ],
    {
      sign,
      spans: [
        { name: 'on', axis: 't', intervals: intervals(1, 19) },
        { name: 'off', axis: 't', intervals: intervals(21, 39) },
        { name: 'plateau', axis: 't', intervals: [[1, 19]] },
      ],
    },
  );
}

describe('the main job', () => {
  const { of, sheet } = calculate(
    [
      'f = 200 kHz exactly',
      'I_on = mean(t1.I, on)',
      'I_off = mean(t1.I, off)',
      'n = I_on/(e*f)',
      'P_esc = (I_on - I_off)/(e*f)',
      't2.P = (t2.I - I_off)/(e*f)',
      'P_m = mean(t2.P, plateau)',
    ],
    [onOff('t1', 1), onOff('t2', 2)],
  );

  it('goes from raw samples to an escape probability with its uncertainty', () => {
    const P = of('P_esc');
    // e f at 200 kHz is 32.04 fA; (29.5 − 0.1) fA of it is 0.9175.
    expect(Math.abs((P.value ?? NaN) - 29.4e-15 / (e * 200e3))).toBeLessThan(4 * (P.u ?? 0));
    expect(P.text).toMatch(/^0\.9\d{3}\(\d\d\)$/);
    expect(of('I_on').text).toMatch(new RegExp(`^29\\.\\d+\\(\\d\\d\\)${thin}fA$`));
    expect(of('n').state).toBe('ok');
    // 1 fA of white noise over 1810 samples on and off each: √2 · 1 fA/√1810 / (e f) = 1.04e-3, gain 4.6e-5.
    expect(Math.abs((P.u ?? NaN) / 1.04e-3 - 1)).toBeLessThan(0.1);
    expect(P.warnings).toEqual([]);
  });

  it('shows where each number came from', () => {
    const lines = of('P_esc').budget;
    expect(lines.map(({ input }) => input).sort()).toEqual(
      ['I_off', 'I_on', 'e, elementary charge', 'f', 'gain of t1.I, CAL-0181'].sort(),
    );
    const on = lines.find(({ input }) => input === 'I_on');
    expect(on).toMatchObject({ type: 'A', distribution: 't', dof: 1809 });
    expect(on?.note).toBe(`t1.I over on: 1810 samples, 1810 effective`);
    expect(lines.find(({ input }) => input.startsWith('gain'))).toMatchObject({
      type: 'B',
      dof: null,
      u: `50${thin}kV/A`,
    });
    expect(of('P_esc').dependsOn).toEqual(['I_on', 'I_off', 'f']);
    expect(of('I_on').dependsOn).toEqual(['t1.I', 'on']);
  });

  it('makes a derived column that is used like a measured one', () => {
    expect(of('t2.P').text).toBe('column, 4000 rows');
    expect(sheet.columns.get('t2.P')?.values).toHaveLength(n);
    expect(of('P_m').state).toBe('ok');
    expect(Math.abs((of('P_m').value ?? NaN) - 0.9175)).toBeLessThan(4 * (of('P_m').u ?? 0));
    // I_off is common to all rows: averaging does not lessen its part.
    const common = of('P_m').budget.find(({ input }) => input === 'I_off');
    const alone = of('P_esc').budget.find(({ input }) => input === 'I_off');
    expect(Math.abs((common?.contribution ?? NaN) / (alone?.contribution ?? 1) - 1)).toBeLessThan(1e-9);
  });
});

describe('a column of a file', () => {
  it('is (raw · unit − offset)/gain, turned where its trace says so', () => {
    const columns = (sign: 'reversed' | null) => [
      traceOf(
        't1',
        [
          {
            symbol: 'I',
            unit: 'V',
            samples: [0.5, 0.7, 0.9],
            gain: { text: '1e9 V/A', source: '' },
            offset: { text: '100 mV', source: '' },
          },
        ],
        { sign },
      ),
    ];
    const of = calculate(['I = mean(t1.I)'], columns(null)).of;
    expect(of('I').text).toMatch(new RegExp(`^0.60\\(12\\)${thin}nA$`));
    expect(calculate(['I = mean(t1.I)'], columns('reversed')).of('I').text).toMatch(/^−0.60\(12\)/);
  });

  it('turns currents only', () => {
    const trace = traceOf('t1', [{ symbol: 'V', unit: 'V', samples: [1, 1, 1] }], { sign: 'reversed' });
    expect(calculate(['V = mean(t1.V)'], [trace]).of('V').value).toBe(1);
  });

  it('asks for the unit, for a readable gain, and for offset and gain of the right kind', () => {
    const error = (column: Partial<GivenColumn>) =>
      calculate(['x = mean(t1.I)'], [traceOf('t1', [{ symbol: 'I', unit: 'V', samples: [1, 2, 3], ...column }])]).of(
        'x',
      ).error;
    expect(error({ unit: null })).toEqual({
      code: 'unit-missing',
      message: 't1.I has no unit yet: state it at the trace.',
    });
    expect(error({ unit: 'foo' })?.code).toBe('unknown-unit');
    expect(error({ gain: { text: '0 V/A', source: '' } })?.code).toBe('division-by-zero');
    expect(error({ gain: { text: '', source: '' } })?.message).toContain('gain of t1.I is empty');
    expect(error({ gain: { text: 'I_on', source: '' } })?.code).toBe('not-allowed');
    expect(error({ offset: { text: '1 pA', source: '' } })?.code).toBe('unit-clash');
    expect(error({ samples: { error: 'The file is gone.' } })?.message).toContain('The file is gone.');
    expect(error({ samples: [NaN, NaN] })?.code).toBe('no-data');
  });

  it('waits where its samples are on their way, and so does what depends on it', () => {
    const trace = traceOf('t1', [{ symbol: 'I', unit: 'A', samples: 'pending' }]);
    const first = calculate(['x = mean(t1.I)', 'y = 2*x'], [trace]);
    expect([first.of('x').state, first.of('y').state]).toEqual(['pending', 'pending']);
    const loaded = { ...trace, column: (): RawColumn => Float64Array.from([1, 2, 3]) };
    const second = calculate(['x = mean(t1.I)', 'y = 2*x'], [loaded], first.sheet);
    expect(second.of('y').value).toBe(4);
  });

  it('leaves out missing samples and says so', () => {
    const of = calculate(
      ['x = mean(t1.I)', 'k = count(t1.I)'],
      [traceOf('t1', [{ symbol: 'I', unit: 'A', samples: [1, NaN, 3] }])],
    ).of;
    expect(of('x')).toMatchObject({ value: 2, dof: 1 });
    expect(of('x').budget[0]?.note).toContain('1 missing');
    expect(of('k').value).toBe(2);
  });

  it('gives one input to columns whose gain is the same certificate, and two where no source is named', () => {
    const gain = (source: string) => ({ text: '2 V/V ± 1 %', source });
    const ratio = (source: string) => {
      const trace = traceOf('t1', [
        { symbol: 'x', unit: 'V', samples: [1, 1, 1], gain: gain(source) },
        { symbol: 'y', unit: 'V', samples: [2, 2, 2], gain: gain(source) },
      ]);
      return calculate(['q = mean(t1.x)/mean(t1.y)'], [trace]).of('q').u ?? NaN;
    };
    expect(ratio('CAL-1')).toBeLessThan(1e-12);
    expect(ratio('')).toBeCloseTo(0.5 * 0.01 * Math.SQRT2, 9);
  });
});

describe('a column read for a plot or a fit', () => {
  const trace = traceOf('t1', [
    {
      symbol: 'I',
      unit: 'mV',
      samples: [30, 60],
      gain: { text: '1e9 V/A ± 1 %', source: 'CAL-1' },
      offset: { text: '0 V ± 2 mV', source: '' },
    },
    { symbol: 'x', unit: null, samples: [1, 2] },
    { symbol: 'y', unit: 'V', samples: 'pending' },
  ]);

  it('has the same unit and numbers as in lines, and what its rows share', () => {
    const read = readColumn(trace, 'I');
    if (read === 'pending' || 'code' in read) throw new Error('not read');
    expect(read).toMatchObject({ symbol: 't1.I', handle: 't1', unit: 'pA' });
    expect([...read.values].map((value) => value.toFixed(9))).toEqual(['30.000000000', '60.000000000']);
    const of = (name: string) =>
      [...(read.shared.find(({ input }) => input.startsWith(name))?.shift ?? [])].map((x) => x.toFixed(9));
    // 2 mV over 1e9 V/A is 2 pA; 1 % more gain is 1 % less current.
    expect(of('offset')).toEqual(['-2.000000000', '-2.000000000']);
    expect(of('gain')).toEqual(['-0.300000000', '-0.600000000']);
  });

  it('says why there is none', () => {
    expect(readColumn(trace, 'x')).toMatchObject({ code: 'unit-missing' });
    expect(readColumn(trace, 'y')).toBe('pending');
    expect(readColumn(trace, 'z')).toMatchObject({ code: 'unknown-name' });
  });
});

describe('spans', () => {
  it('include their ends, in the numbers of the file, and hold several intervals', () => {
    const trace = traceOf(
      't1',
      [
        { symbol: 't', unit: 'ms', samples: [0, 1, 2, 3, 4, 5, 6] },
        { symbol: 'I', unit: 'A', samples: [9, 1, 2, 9, 4, 5, 9] },
      ],
      {
        spans: [
          {
            name: 'on',
            axis: 't',
            intervals: [
              [1, 2],
              [5, 4],
            ],
          },
        ],
      },
    );
    const of = calculate(
      ['k = count(t1.I, on)', 'x = mean(t1.I, on)', 'z = mean(t1.I, of)', 'o = on', 'a = min(t1.I, on)'],
      [trace],
    ).of;
    expect(of('k').value).toBe(4);
    expect(of('x').value).toBe(3);
    expect(of('a').value).toBe(1);
    expect(of('z').error?.message).toBe('t1 has no span `of`. Its spans: on.');
    expect(of('o').error?.message).toContain('span of t1');
  });
});

describe('rows of many intervals', () => {
  it('are those of which each lies in one, whatever their order', () => {
    const interval = fc.tuple(fc.integer({ min: 0, max: 60 }), fc.integer({ min: 0, max: 60 }));
    const axis = fc.array(fc.oneof(fc.integer({ min: 0, max: 60 }), fc.constant(NaN)), { minLength: 1, maxLength: 80 });
    fc.assert(
      fc.property(axis, fc.array(interval, { minLength: 1, maxLength: 8 }), (samples, intervals) => {
        const rows = spanRows(traceOf('t1', [{ symbol: 't', unit: 's', samples }]), 0, intervals);
        const found = rows.flatMap(([start, end]) => Array.from({ length: end - start }, (_, i) => start + i));
        const wanted = samples.flatMap((x, row) =>
          intervals.some(([a, b]) => x >= Math.min(a, b) && x <= Math.max(a, b)) ? [row] : [],
        );
        expect(found).toEqual(wanted);
      }),
    );
  });
});

describe('derived columns', () => {
  const trace = () =>
    traceOf('t1', [
      { symbol: 'V', unit: 'V', samples: [1, 0, 2] },
      { symbol: 'I', unit: 'A', samples: [2, 2, 2] },
    ]);
  const other = () => traceOf('t2', [{ symbol: 'V', unit: 'V', samples: [1, 2, 3] }]);

  it('leave rows empty where nothing is defined', () => {
    const { sheet } = calculate(['t1.G = t1.I/t1.V'], [trace()]);
    expect([...(sheet.columns.get('t1.G')?.values ?? [])]).toEqual([2, NaN, 1]);
    expect(sheet.columns.get('t1.G')?.unit).toBe('S');
  });

  it.each([
    ['t1.V = 2*t1.V', 'defined-twice'],
    ['t1.G = 3 V', 'not-allowed'],
    ['G = 2*t1.V', 'not-allowed'],
    ['t2.G = 2*t1.V', 'not-allowed'],
    ['t1.G = t1.V + t2.V', 'not-allowed'],
    ['t1.G = t1.V + t1.I', 'unit-clash'],
    ['t1.G = t1.H', 'unknown-name'],
    ['t3.G = t3.V', 'unknown-name'],
    ['x = u(t1.V)', 'not-allowed'],
  ])('%s is refused as %s', (line, code) => {
    const sheet = evaluateSheet({ cells: cellsOf([line]), traces: [trace(), other()] });
    expect(sheet.results.get('c0')?.error?.code).toBe(code);
  });

  it('of °C and dBm keep their scale', () => {
    const warm = traceOf('t1', [
      { symbol: 'T', unit: '°C', samples: [20, 22, 24] },
      { symbol: 'P', unit: 'dBm', samples: [0, 10, 20] },
    ]);
    const { of, sheet } = calculate(
      ['T = mean(t1.T)', 's = sd(t1.T)', 't1.W = convert(t1.P, W)', 't1.D = t1.T - 20 °C', 'p = mean(t1.P)'],
      [warm],
    );
    expect(of('T').text).toBe(`22.0(12)${thin}°C`);
    expect(of('s').unit).toBe('K');
    expect([...(sheet.columns.get('t1.W')?.values ?? [])].map((x) => Number(x.toPrecision(12)))).toEqual([
      0.001, 0.01, 0.1,
    ]);
    expect(sheet.columns.get('t1.D')?.unit).toBe('K');
    expect(of('p').error?.message).toContain('dBm');
  });
});

describe('from sheet to sheet', () => {
  const lines = [
    'f = 200 kHz exactly',
    'I_on = mean(t1.I, on)',
    'P = I_on/(e*f)',
    't1.P = t1.I/(e*f)',
    'Q = mean(t1.P, on)',
  ];

  it('statistics follow gain, unit, sign, span and bytes', () => {
    const base = onOff('t1', 1);
    const first = calculate(lines, [base]);
    const changed: TraceSource[] = [
      onOff('t1', 1, { gain: { text: '2e9 V/A ± 50 ppm', source: 'CAL-0181' } }),
      onOff('t1', 1, { unit: 'V' }),
      onOff('t1', 1, {}, 'reversed'),
      { ...base, spans: base.spans.map((span) => ({ ...span, intervals: [[1, 9]] })) },
      { ...onOff('t1', 9), digest: 'other bytes' },
    ];
    for (const trace of changed) {
      const taken = calculate(lines, [trace], first.sheet).sheet;
      expect(structuredClone(taken)).toEqual(structuredClone(calculate(lines, [trace]).sheet));
      expect(taken.results.get('c4')?.text).not.toBe(first.sheet.results.get('c4')?.text);
    }
  });

  it('statistics of unchanged samples are taken over', () => {
    const base = onOff('t1', 1);
    const first = calculate(lines, [base]);
    const second = calculate(['f = 300 kHz exactly', ...lines.slice(1)], [onOff('t1', 1)], first.sheet);
    expect(second.of('I_on')).toBe(first.of('I_on'));
    expect(second.of('P').value).toBeCloseTo(((first.of('P').value ?? NaN) * 2) / 3, 12);
  });
});
