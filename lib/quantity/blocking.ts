import { incompleteGammaQ } from './gamma';

/**
 * Standard uncertainty of the mean of samples that may be correlated, by block averaging
 * (H. Flyvbjerg and H. G. Petersen, J. Chem. Phys. 91, 461, 1989).
 *
 * The series is halved again and again by averaging neighbours; s_l²/n_l grows until the blocks no longer know of one
 * another and then stays: the plateau. Rule for the plateau (deterministic): with σ_k² the variance and γ_k the lag-one
 * autocovariance of the blocks at level k, and n_k their number, M_l = Σ_{k≥l} n_k (γ_k/σ_k²)² has about a χ²
 * distribution with as many degrees of freedom as it has terms where the blocks from level l on are independent
 * (M. Jonsson, Phys. Rev. E 98, 043304, 2018). The plateau starts at the first level whose M_l is below the χ² quantile
 * of `confidence`, and — where that is not the samples themselves — one level later, because the rule looks only for
 * correlation that it can already see.
 */
export type BlockedMean = {
  mean: number;
  /** Standard deviation of the samples. */
  s: number;
  /** Standard uncertainty of the mean, and its degrees of freedom (blocks − 1). */
  u: number;
  dof: number;
  count: number;
  /** s²/u²: as many independent samples would give this u. */
  effective: number;
  blocks: number;
  blockLength: number;
  /** No plateau with at least eight blocks was found: u is a lower bound. */
  short: boolean;
  /** Fewer than `fewest` samples: s/√n, correlation cannot be told. */
  few: boolean;
};

const confidence = 0.95;
const fewest = 16;
const fewestBlocks = 8;

export function mean(values: Float64Array): number {
  let total = 0;
  let lost = 0;
  // Neumaier's compensated sum: a million samples of one sign lose no digits.
  for (let i = 0; i < values.length; i++) {
    const x = values[i];
    const next = total + x;
    lost += Math.abs(total) >= Math.abs(x) ? total - next + x : x - next + total;
    total = next;
  }
  return (total + lost) / values.length;
}

/** Averages of neighbouring pairs; an odd last one is left out. */
function halve(values: Float64Array): Float64Array {
  const result = new Float64Array(values.length >> 1);
  for (let i = 0; i < result.length; i++) result[i] = (values[2 * i] + values[2 * i + 1]) / 2;
  return result;
}

type Level = { n: number; variance: number; statistic: number };

/** Sum of squares about the mean, and of products of neighbours. */
function level(deviations: Float64Array): Level {
  const n = deviations.length;
  const centre = mean(deviations);
  let squares = 0;
  let neighbours = 0;
  let before = 0;
  for (let i = 0; i < n; i++) {
    const d = deviations[i] - centre;
    squares += d * d;
    if (i > 0) neighbours += d * before;
    before = d;
  }
  // The lag-one estimate is low by 1/n for independent blocks; adding that keeps the test right for few blocks.
  const rho = squares > 0 ? neighbours / squares + 1 / n : 0;
  return { n, variance: squares / (n - 1), statistic: (n * n * rho * rho) / Math.max(1, n - 2) };
}

/** `values` without NaN, in the order in which they were taken; at least two. */
export function blockedMean(values: Float64Array): BlockedMean {
  const count = values.length;
  const centre = mean(values);
  let blocks: Float64Array = new Float64Array(count);
  for (let i = 0; i < count; i++) blocks[i] = values[i] - centre;
  const levels: Level[] = [];
  while (blocks.length >= 4 || levels.length === 0) {
    levels.push(level(blocks));
    blocks = halve(blocks);
  }
  const first = levels[0];
  const s = Math.sqrt(first.variance);
  const few = count < fewest;
  const found = few || s === 0 ? 0 : plateau(levels);
  // The last level with enough blocks stands where there is no plateau.
  const usable = levels.filter(({ n }) => n >= fewestBlocks).length - 1;
  const at = few ? 0 : Math.max(0, Math.min(found, usable));
  const chosen = levels[at];
  const u = Math.sqrt(chosen.variance / chosen.n);
  // Blocks of independent samples may come out below s/√n by chance; correlation that lowers u is not claimed.
  const effective = u > 0 ? Math.min(count, first.variance / (u * u)) : count;
  // Correlation over an eighth of the series leaves few effective samples; where there are many, the test has only
  // met with chance (it does so in some per cent of white series), and the widest blocks are merely cautious.
  const short = !few && found > usable && effective < 4 * chosen.n;
  return {
    mean: centre,
    s,
    u,
    dof: chosen.n - 1,
    count,
    effective,
    blocks: chosen.n,
    blockLength: 2 ** at,
    short,
    few,
  };
}

function plateau(levels: Level[]): number {
  let sum = 0;
  let first = levels.length;
  // From the last level down: M_l is the sum from l on.
  for (let l = levels.length - 1; l >= 0; l--) {
    sum += levels[l].statistic;
    if (incompleteGammaQ((levels.length - l) / 2, sum / 2) > 1 - confidence) first = l;
  }
  return first === 0 ? 0 : first + 1;
}

export type Drift = {
  /** Change of a straight line from the first sample to the last, and its standard uncertainty. */
  change: number;
  u: number;
  significant: boolean;
};

/** Whether a straight line through the samples, in their order, is steeper than four of its standard uncertainties. */
export function drift(values: Float64Array): Drift {
  const n = values.length;
  if (n < fewest) return { change: 0, u: 0, significant: false };
  const centre = mean(values);
  const middle = (n - 1) / 2;
  let products = 0;
  for (let i = 0; i < n; i++) products += (i - middle) * (values[i] - centre);
  const slope = products / ((n * (n * n - 1)) / 12);
  const rest = new Float64Array(n);
  for (let i = 0; i < n; i++) rest[i] = values[i] - centre - slope * (i - middle);
  const change = slope * (n - 1);
  // A slope over equally spaced samples has √12 times the mean's uncertainty over the whole length.
  const u = blockedMean(rest).u * Math.sqrt(12);
  return { change, u, significant: Math.abs(change) > 4 * u && change !== 0 };
}

/** Correlation coefficient of two series of equal length after averaging in blocks; 0 where one of them is constant. */
export function blockedCorrelation(a: Float64Array, b: Float64Array, blockLength: number): number {
  const blocks = Math.floor(a.length / blockLength);
  const length = blocks >= 2 ? blockLength : 1;
  const n = Math.floor(a.length / length);
  const average = (series: Float64Array) => {
    const result = new Float64Array(n);
    const start = series[0] ?? 0;
    for (let i = 0; i < n * length; i++) {
      const block = Math.floor(i / length);
      result[block] = result[block] + (series[i] - start) / length;
    }
    return result;
  };
  const [x, y] = [average(a), average(b)];
  const [mx, my] = [mean(x), mean(y)];
  let xx = 0;
  let yy = 0;
  let xy = 0;
  for (let i = 0; i < n; i++) {
    const dx = x[i] - mx;
    const dy = y[i] - my;
    xx += dx * dx;
    yy += dy * dy;
    xy += dx * dy;
  }
  return xx > 0 && yy > 0 ? Math.max(-1, Math.min(1, xy / Math.sqrt(xx * yy))) : 0;
}
