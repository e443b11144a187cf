import type { BenchRow } from './csv';
import { evaluateSheet } from '@/lib/expression/evaluate';
import type { CellSource, Sheet, TraceSource } from '@/lib/expression/contract';
import { autoregressive } from '@/lib/quantity/example-noise';
import { cellsOf, traceOf } from '@/lib/expression/example-trace';

/** An entry of `count` values: a frequency that all the others hang on, means of a trace, and chains of quotients. */
function entry(count: number): { cells: CellSource[]; traces: TraceSource[] } {
  const samples = autoregressive(20_000, 0.5, 1);
  const trace = traceOf(
    't1',
    [
      { symbol: 't', unit: 's', samples: samples.map((_, i) => i) },
      {
        symbol: 'I',
        unit: 'mV',
        samples: samples.map((x) => 0.03 + 1e-3 * x),
        gain: { text: '1e9 V/A ± 50 ppm', source: 'CAL-0181' },
      },
    ],
    {
      spans: [
        { name: 'on', axis: 't', intervals: [[0, 9_999]] },
        { name: 'off', axis: 't', intervals: [[10_000, 20_000]] },
      ],
    },
  );
  const lines = [
    'f = 200 kHz exactly',
    'I_on = mean(t1.I, on)',
    'I_off = mean(t1.I, off)',
    'P_0 = (I_on - I_off)/(e*f)',
  ];
  for (let i = 1; lines.length < count; i++)
    lines.push(`P_${i} = ${i % 10 === 0 ? 'P_0' : `P_${i - 1}`}*(1 + I_off/(e*f)) + ${i}.0(1)e-3`);
  return { cells: cellsOf(lines), traces: [trace] };
}

/** Median time in ms of one change of the frequency, on which every value but the means depends. */
function keystroke({ cells, traces }: ReturnType<typeof entry>, repeats: number): number {
  let sheet: Sheet = evaluateSheet({ cells, traces });
  const times: number[] = [];
  for (let i = 0; i < repeats; i++) {
    const edited = cells.map((cell) => (cell.id === 'c0' ? { ...cell, source: `f = ${200 + i}.5 kHz exactly` } : cell));
    const start = performance.now();
    sheet = evaluateSheet({ cells: edited, traces }, sheet);
    times.push(performance.now() - start);
  }
  const broken = [...sheet.results.values()].filter(({ state }) => state !== 'ok');
  if (broken.length > 0) throw new Error(`The benchmark's own entry has errors: ${broken[0]?.error?.message ?? ''}`);
  return times.sort((a, b) => a - b)[times.length >> 1] ?? NaN;
}

/**
 * Dependent values after one keystroke, in ms: 200 of them (the bar is 8 ms in the browser), and the cost against the
 * number of values. There is no peer: general tools do not recalculate quantities with budgets.
 */
export async function recalculation(): Promise<BenchRow[]> {
  const rows: BenchRow[] = [];
  for (const count of [50, 200, 800]) {
    const ours = keystroke(entry(count), 31);
    rows.push({
      name: `${count} dependent values after one keystroke, ms`,
      ours,
      peer: null,
      ratio: null,
      n: count,
      note: 'no general-purpose peer recalculates quantities with budgets',
    });
  }
  return Promise.resolve(rows);
}
