import { buildPyramid } from '@/lib/plot/pyramid';
import { encodeView, memorySource, plotView } from '@/lib/plot/view';
import type { BenchRow } from './csv';

/** Milliseconds to build the pyramid of 1e7 samples and to take a view of 2000 pixels from it; no peer has one. */
export async function benchPyramid(): Promise<BenchRow[]> {
  const n = 10_000_000;
  const y = Float64Array.from({ length: n }, (_, i) => Math.sin(i * 1e-4) + ((i * 48271) % 1009) * 1e-4);
  const x = Float64Array.from({ length: n }, (_, i) => i * 1e-5);
  const started = performance.now();
  const pyramid = buildPyramid(y);
  const build = performance.now() - started;
  const xs = memorySource(x, 'increasing');
  const ys = memorySource(y, 'neither', pyramid);
  const times: number[] = [];
  for (let i = 0; i < 50; i += 1) {
    const from = (i % 10) * 7;
    const start = performance.now();
    encodeView(await plotView(xs, ys, { from: i === 0 ? null : from, to: i === 0 ? null : from + 30, pixels: 2000 }));
    times.push(performance.now() - start);
  }
  times.sort((a, b) => a - b);
  const row = { peer: null, ratio: null, n, note: 'no general-purpose peer keeps a pyramid' };
  return [
    { name: 'pyramid of 1e7 samples, build, ms', ours: build, ...row },
    { name: 'view of 1e7 samples at 2000 pixels, median ms', ours: times[25] as number, ...row },
    { name: 'view of 1e7 samples at 2000 pixels, slowest ms', ours: times[49] as number, ...row },
  ];
}
