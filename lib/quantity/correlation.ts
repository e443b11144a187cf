import { blockedCorrelation } from './blocking';
import type { Input, RowRanges, Sample } from './input';

/** r(x_i, x_j) of two inputs, and whether it is known or had to be taken as 0. */
export type Correlation = { r: number; known: boolean };

const none: Correlation = { r: 0, known: true };

export function rowsInCommon(a: RowRanges, b: RowRanges): RowRanges {
  const common: [number, number][] = [];
  let i = 0;
  let j = 0;
  while (i < a.length && j < b.length) {
    const [p, q] = [a[i], b[j]];
    const start = Math.max(p[0], q[0]);
    const end = Math.min(p[1], q[1]);
    if (start < end) common.push([start, end]);
    if (p[1] < q[1]) i++;
    else j++;
  }
  return common;
}

/**
 * Correlation of means over rows of one trace (GUM 5.2.3): the sample correlation of the two columns over the rows that
 * both use, averaged in blocks where the samples are correlated in time, times m/√(n₁n₂) where only m rows are common.
 * Found values are kept: one Correlations object serves a whole sheet and its later versions.
 */
export class Correlations {
  private readonly known = new Map<string, { a: Sample; b: Sample; correlation: Correlation }>();

  between(x: Input, y: Input): Correlation {
    const stated = x.correlated?.get(y.id) ?? y.correlated?.get(x.id);
    if (stated !== undefined) return { r: Math.max(-1, Math.min(1, stated)), known: true };
    if (x.sample === null || y.sample === null || x.sample.digest !== y.sample.digest) return none;
    const [a, b] = x.id < y.id ? [x, y] : [y, x];
    const key = `${a.id}\n${b.id}`;
    const found = this.known.get(key);
    if (found && found.a === a.sample && found.b === b.sample) return found.correlation;
    const correlation = measured(a.sample as Sample, b.sample as Sample);
    if (this.known.size > 20_000) this.known.clear();
    this.known.set(key, { a: a.sample as Sample, b: b.sample as Sample, correlation });
    return correlation;
  }
}

function measured(a: Sample, b: Sample): Correlation {
  const common = rowsInCommon(a.rows, b.rows);
  if (common.length === 0) return none;
  if (a.statistic !== 'mean' || b.statistic !== 'mean') return { r: 0, known: false };
  const length = common.reduce((total, [start, end]) => total + end - start, 0);
  const x = new Float64Array(length);
  const y = new Float64Array(length);
  let n = 0;
  for (const [start, end] of common) {
    for (let row = start; row < end; row++) {
      const [p, q] = [a.values[row], b.values[row]];
      if (Number.isNaN(p) || Number.isNaN(q)) continue;
      x[n] = p;
      y[n] = q;
      n++;
    }
  }
  if (n < 2) return none;
  const r = blockedCorrelation(x.subarray(0, n), y.subarray(0, n), Math.max(a.blockLength, b.blockLength));
  return { r: (r * n) / Math.sqrt(a.count * b.count), known: true };
}
