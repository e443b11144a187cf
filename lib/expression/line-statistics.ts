import { Refusal } from '@/lib/errors/refusal';
import { blockedMean, mean } from '@/lib/quantity/blocking';
import type { Column, Scalar, Term } from '@/lib/quantity/quantity';
import { multiplyDimensions } from '@/lib/units/dimension';
import { gather, shared, statistic, type Gathered, type Over } from './statistics';

/** Rows where both columns have a sample. */
function pairs(y: Column, x: Column, over: Over): { rows: Gathered; ys: Float64Array; xs: Float64Array } {
  const both = new Float64Array(y.values.length);
  for (let i = 0; i < both.length; i++) both[i] = y.values[i] + 0 * x.values[i];
  const rows = gather(both, over, y.label);
  const take = (series: Float64Array) => Float64Array.from(rows.rows, (row) => series[row]);
  return { rows, ys: take(y.values), xs: take(x.values) };
}

function merge(into: Map<string, Term<number>>, more: Map<string, Term<number>>): Map<string, Term<number>> {
  for (const [id, { input, c }] of more) into.set(id, { input, c: c + (into.get(id)?.c ?? 0) });
  return into;
}

/**
 * Slope of the straight line through y against x by least squares, with the standard deviation of its residuals
 * (GUM H.3), widened where the residuals are correlated by what block averaging finds for their mean.
 */
export function slopeOf(y: Column, x: Column, over: Over): Scalar {
  const { rows, ys, xs } = pairs(y, x, over);
  const n = ys.length;
  if (n < 3) throw new Refusal('no-data', `slope of ${y.label} needs at least three samples.`);
  const [mx, my] = [mean(xs), mean(ys)];
  let sxx = 0;
  let sxy = 0;
  for (let i = 0; i < n; i++) {
    const d = xs[i] - mx;
    sxx += d * d;
    sxy += d * (ys[i] - my);
  }
  if (sxx === 0) throw new Refusal('no-data', `slope of ${y.label}: ${x.label} has the same value in all rows.`);
  const b = sxy / sxx;
  const residuals = new Float64Array(n);
  let squares = 0;
  for (let i = 0; i < n; i++) {
    const r = ys[i] - my - b * (xs[i] - mx);
    residuals[i] = r;
    squares += r * r;
  }
  const blocked = blockedMean(residuals);
  const wider = blocked.s > 0 ? Math.max(1, blocked.u / (blocked.s / Math.sqrt(n))) : 1;
  const u = Math.sqrt(squares / (n - 2) / sxx) * wider;
  const dof = wider > 1 ? Math.max(1, blocked.dof - 1) : n - 2;
  const along = (weight: (i: number) => number) => (c: Float64Array) => {
    let total = 0;
    for (let i = 0; i < n; i++) total += weight(i) * c[rows.rows[i]];
    return total / sxx;
  };
  const ofY = shared(
    y,
    along((i) => xs[i] - mx),
    0,
  );
  const ofX = shared(
    x,
    along((i) => residuals[i] - b * (xs[i] - mx)),
    0,
  );
  const note = `${y.label} against ${x.label}${over.name ? ` over ${over.name}` : ''}: ${n} samples${wider > 1 ? ', residuals correlated' : ''}`;
  const found = { value: b, u, dof, blockLength: blocked.blockLength, note };
  const dimension = multiplyDimensions(y.dimension, x.dimension, -1);
  return statistic(`slope against ${x.label}`, y, over, rows, found, merge(ofY, ofX), {
    dimension,
    scale: 'linear',
    hint: null,
  });
}

/**
 * Integral of y over x by the trapezoidal rule. The scatter of the samples is taken from their second differences,
 * s² = Σ(y_{i−1} − 2y_i + y_{i+1})²/(6(n − 2)), which do not see a smooth signal; it is assumed white.
 */
export function integralOf(y: Column, x: Column, over: Over): Scalar {
  const { rows, ys, xs } = pairs(y, x, over);
  const n = ys.length;
  if (n < 3) throw new Refusal('no-data', `integral of ${y.label} needs at least three samples.`);
  const weights = new Float64Array(n);
  for (let i = 1; i < n; i++) {
    const half = (xs[i] - xs[i - 1]) / 2;
    weights[i - 1] = weights[i - 1] + half;
    weights[i] = weights[i] + half;
  }
  let value = 0;
  let weightSquares = 0;
  for (let i = 0; i < n; i++) {
    value += weights[i] * ys[i];
    weightSquares += weights[i] * weights[i];
  }
  let differences = 0;
  for (let i = 1; i < n - 1; i++) {
    const second = ys[i - 1] - 2 * ys[i] + ys[i + 1];
    differences += second * second;
  }
  const s = Math.sqrt(differences / (6 * (n - 2)));
  const u = s * Math.sqrt(weightSquares);
  const ofY = shared(y, (c) => weights.reduce((total, w, i) => total + w * c[rows.rows[i]], 0), xs[n - 1] - xs[0]);
  const ofX = shared(
    x,
    (c) => {
      let total = 0;
      for (let i = 1; i < n; i++) {
        const step = c[rows.rows[i]] - c[rows.rows[i - 1]];
        total += ((ys[i] + ys[i - 1]) / 2) * step;
      }
      return total;
    },
    0,
  );
  const note = `${y.label} over ${x.label}${over.name ? ` in ${over.name}` : ''}: ${n} samples; scatter from second differences, taken as white`;
  const found = { value, u, dof: Math.max(1, Math.round((18 / 35) * (n - 2))), blockLength: 1, note };
  const dimension = multiplyDimensions(y.dimension, x.dimension);
  return statistic(`integral over ${x.label}`, y, over, rows, found, merge(ofY, ofX), {
    dimension,
    scale: 'linear',
    hint: null,
  });
}
