import { execFileSync } from 'node:child_process';
import { mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { parseTextTrace } from '@/lib/trace-format/text-parser';

export type BenchRow = {
  name: string;
  ours: number;
  peer: number | null;
  ratio: number | null;
  n: number;
  note?: string;
};

const rows = 1_000_000;

function sampleFile(): string {
  // A linear congruential generator: the same file on every machine.
  let state = 1;
  const next = () => (state = (state * 48271) % 2147483647) / 2147483647;
  const lines = ['t / s,V_exit / mV,I / pA'];
  for (let i = 0; i < rows; i += 1) {
    lines.push(`${(i * 0.001).toFixed(3)},${(-360 + next()).toFixed(6)},${(96.13 + next()).toFixed(6)}`);
  }
  return `${lines.join('\n')}\n`;
}

const median = (values: number[]) => [...values].sort((a, b) => a - b)[Math.floor(values.length / 2)] as number;

const pandas = `
import sys, time, statistics, pandas
times = []
for _ in range(5):
    start = time.perf_counter()
    pandas.read_csv(sys.argv[1], engine='c')
    times.append((time.perf_counter() - start) * 1e3)
print(statistics.median(times))
`;

/** Milliseconds for 1e6 rows of three columns, median of five; the peer is pandas' C reader where python3 has it. */
export async function benchCsv(): Promise<BenchRow[]> {
  const folder = mkdtempSync(path.join(tmpdir(), 'bench-csv-'));
  try {
    const file = path.join(folder, 'trace.csv');
    writeFileSync(file, sampleFile());
    const times: number[] = [];
    for (let i = 0; i < 5; i += 1) {
      const start = performance.now();
      const { trace } = parseTextTrace(new Uint8Array(readFileSync(file)));
      times.push(performance.now() - start);
      if (trace.rows !== rows) throw new Error(`read ${trace.rows} rows of ${rows}`);
    }
    const ours = median(times);
    let peer: number | null = null;
    let note: string | undefined;
    try {
      peer = Number(
        execFileSync('python3', ['-c', pandas, file], { encoding: 'utf8', stdio: ['ignore', 'pipe', 'pipe'] }),
      );
    } catch (error) {
      note = `python3 with pandas is not installed here: ${String((error as Error).message).split('\n')[0]}`;
    }
    const ratio = peer === null ? null : peer / ours;
    return [{ name: 'csv 1e6 rows x 3 columns, ms', ours, peer, ratio, n: rows, ...(note ? { note } : {}) }];
  } finally {
    rmSync(folder, { recursive: true, force: true });
  }
}
