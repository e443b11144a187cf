import { Refusal } from '@/lib/errors/refusal';
import { blockedMean, drift, mean, type BlockedMean } from '@/lib/quantity/blocking';
import { grouped } from '@/lib/quantity/digits';
import { writeSpread } from '@/lib/quantity/format';
import type { Input, RowRanges } from '@/lib/quantity/input';
import { plain, type Column, type Scalar, type Term } from '@/lib/quantity/quantity';
import type { Dimension } from '@/lib/units/dimension';
import type { Unit } from '@/lib/units/parse';
import { shortened } from './typeset';

/** Rows that a statistic runs over: a span's, or all. */
export type Over = { rows: RowRanges; rowsKey: string; name: string | null };

/** Samples of some rows without the missing ones, and the row that each comes from. */
export type Gathered = { values: Float64Array; rows: Int32Array; missing: number };

type Averaged = { gathered: Gathered; blocked: BlockedMean; changes: ReturnType<typeof drift> };

/** Block averages already found, by samples (equal array, equal samples) and rows. Survives from sheet to sheet. */
export class StatisticsCache {
  private readonly known = new WeakMap<Float64Array, Map<string, Averaged>>();

  averaged(values: Float64Array, over: Over, label: string): Averaged {
    let byRows = this.known.get(values);
    if (!byRows) this.known.set(values, (byRows = new Map()));
    const found = byRows.get(over.rowsKey);
    if (found) return found;
    const gathered = gather(values, over, label);
    const blocked = blockedMean(gathered.values);
    const made = { gathered, blocked, changes: drift(gathered.values) };
    byRows.set(over.rowsKey, made);
    return made;
  }
}

export function allRows(column: Column): Over {
  const { length } = column.values;
  return { rows: [[0, length]], rowsKey: `0-${length}`, name: null };
}

export function gather(values: Float64Array, over: Over, label: string): Gathered {
  const length = over.rows.reduce((total, [start, end]) => total + Math.min(end, values.length) - start, 0);
  const kept = new Float64Array(length);
  const rows = new Int32Array(length);
  let n = 0;
  for (const [start, end] of over.rows) {
    for (let row = start; row < end && row < values.length; row++) {
      const value = values[row];
      if (Number.isNaN(value)) continue;
      kept[n] = value;
      rows[n] = row;
      n++;
    }
  }
  if (n === 0)
    throw new Refusal('no-data', `${label} has no samples ${over.name ? `in the span ${over.name}` : 'yet'}.`);
  return { values: kept.subarray(0, n), rows: rows.subarray(0, n), missing: length - n };
}

const count = (n: number) => grouped(String(Math.round(n)), '\u2009');

function overText(column: Column, over: Over): string {
  const label = shortened(column.label);
  return over.name ? `${label} over ${over.name}` : label;
}

/** Shared inputs of a column, through a linear functional Σ w_i x_i of its rows; `uniform` is Σ w_i. */
export function shared(
  column: Column,
  weigh: (series: Float64Array) => number,
  uniform: number,
): Map<string, Term<number>> {
  const terms = new Map<string, Term<number>>();
  for (const [id, { input, c }] of column.terms) {
    const through = typeof c === 'number' ? c * uniform : weigh(c);
    if (through !== 0) terms.set(id, { input, c: through });
  }
  return terms;
}

export type Found = {
  value: number;
  u: number;
  dof: number | null;
  blockLength: number;
  note: string;
};

export type Resulting = { dimension: Dimension; scale: Unit['scale']; hint: Unit | null };

/** A statistic as a quantity: its own scatter as one input of type A, and the shared inputs of the column. */
export function statistic(
  name: string,
  column: Column,
  over: Over,
  gathered: Gathered,
  found: Found,
  terms: Map<string, Term<number>>,
  resulting: Resulting,
): Scalar {
  const input: Input = {
    id: `${name}|${column.digest}|${column.key}|${over.rowsKey}`,
    label: `${name} of ${overText(column, over)}`,
    type: 'A',
    estimate: found.value,
    u: found.u,
    dimension: resulting.dimension,
    unit: resulting.hint,
    scale: resulting.scale,
    distribution: 't',
    dof: found.dof,
    note: found.note,
    sample: {
      digest: column.digest,
      statistic: name === 'mean' ? 'mean' : 'other',
      values: column.values,
      rows: over.rows,
      group: `${column.digest}|${over.rowsKey}`,
      count: gathered.values.length,
      blockLength: found.blockLength,
    },
  };
  terms.set(input.id, { input, c: 1 });
  return { kind: 'scalar', value: found.value, ...resulting, terms };
}

/** The same statistic under the symbol that a line gives it, as its readers know it. */
export function named(scalar: Scalar, symbol: string): Scalar {
  const [id, term] = [...scalar.terms].at(-1) ?? [];
  if (id === undefined || !term || term.input.sample === null) return scalar;
  return { ...scalar, terms: new Map(scalar.terms).set(id, { ...term, input: { ...term.input, label: symbol } }) };
}

function pick(series: Float64Array, gathered: Gathered): Float64Array {
  const result = new Float64Array(gathered.rows.length);
  for (let i = 0; i < result.length; i++) result[i] = series[gathered.rows[i]];
  return result;
}

/** Sentences on what the samples do not allow to be told. */
function remarks(column: Column, over: Over, { blocked, changes }: Averaged): string[] {
  const text = overText(column, over);
  const sentences: string[] = [];
  if (changes.significant) {
    const change = writeSpread(Math.abs(changes.change), column.dimension, null);
    sentences.push(
      `${text} drifts: a straight line through it changes by ${change}, more than four of its standard uncertainties. The uncertainty of its mean is no measure of that.`,
    );
  } else if (blocked.short) {
    sentences.push(
      `${text} is too short to tell its uncertainty: ${count(blocked.count)} samples are correlated over more than an eighth of it. What is given is a lower bound.`,
    );
  }
  if (blocked.s === 0 && blocked.count > 1) {
    sentences.push(
      `${text}: all samples are equal, so their scatter says nothing; add the resolution as rectangular(0, half a digit).`,
    );
  }
  return sentences;
}

/** Mean with its type A uncertainty by block averaging; see lib/quantity/blocking. */
export function meanOf(column: Column, over: Over, cache: StatisticsCache, warn: (sentence: string) => void): Scalar {
  const resulting = { dimension: column.dimension, scale: column.scale, hint: column.hint };
  const gatheredAlone = column.values.length === 0 ? null : gatherIfSingle(column, over);
  if (gatheredAlone) {
    warn(`${overText(column, over)} is a single sample: its scatter is not known and no uncertainty is taken from it.`);
    const row = gatheredAlone.rows[0];
    const terms = shared(column, (c) => c[row], 1);
    return { kind: 'scalar', value: gatheredAlone.values[0], ...resulting, terms };
  }
  const averaged = cache.averaged(column.values, over, column.label);
  const { gathered, blocked } = averaged;
  for (const sentence of remarks(column, over, averaged)) warn(sentence);
  const n = `${count(blocked.count)} samples`;
  const missing = gathered.missing > 0 ? `, ${count(gathered.missing)} missing` : '';
  const note = blocked.few
    ? `${overText(column, over)}: ${n}${missing}, s/√n; too few to tell whether they are correlated`
    : `${overText(column, over)}: ${n}, ${count(blocked.effective)} effective${missing}`;
  const found = { value: blocked.mean, u: blocked.u, dof: blocked.dof, blockLength: blocked.blockLength, note };
  const terms = shared(column, (c) => mean(pick(c, gathered)), 1);
  return statistic('mean', column, over, gathered, found, terms, resulting);
}

function gatherIfSingle(column: Column, over: Over): Gathered | null {
  let n = 0;
  for (const [start, end] of over.rows) {
    for (let row = start; row < end && n < 2; row++) if (!Number.isNaN(column.values[row])) n++;
    if (n >= 2) return null;
  }
  return gather(column.values, over, column.label);
}

const needTwo = (column: Column, name: string) =>
  new Refusal('no-data', `${name} of ${column.label} needs at least two samples.`);

/** Standard deviation of the samples; its own u is s/√(2(n_eff − 1)) for normal scatter (GUM E.4.3). */
export function sdOf(column: Column, over: Over, cache: StatisticsCache): Scalar {
  const { gathered, blocked } = averagedOfTwo(column, over, cache, 'sd');
  const s = blocked.s;
  const free = Math.max(1, blocked.effective - 1);
  const note = `${overText(column, over)}: ${count(blocked.count)} samples, ${count(blocked.effective)} effective; normal scatter assumed`;
  const found = { value: s, u: s / Math.sqrt(2 * free), dof: free, blockLength: blocked.blockLength, note };
  const weigh = (c: Float64Array) => {
    const picked = pick(c, gathered);
    let products = 0;
    for (let i = 0; i < picked.length; i++) products += (gathered.values[i] - blocked.mean) * picked[i];
    return s > 0 ? products / ((blocked.count - 1) * s) : 0;
  };
  const hint = column.scale === 'linear' ? column.hint : null;
  return statistic('sd', column, over, gathered, found, shared(column, weigh, 0), {
    dimension: column.dimension,
    scale: 'linear',
    hint,
  });
}

/** Median; its u is √(π/2) times that of the mean (normal scatter, large n). */
export function medianOf(column: Column, over: Over, cache: StatisticsCache, warn: (sentence: string) => void): Scalar {
  const averaged = averagedOfTwo(column, over, cache, 'median');
  const { gathered, blocked } = averaged;
  for (const sentence of remarks(column, over, averaged)) warn(sentence);
  const order = Array.from(gathered.values.keys()).sort((a, b) => gathered.values[a] - gathered.values[b]);
  const middle = order.slice((order.length - 1) >> 1, (order.length >> 1) + 1);
  const at = (series: Float64Array) => middle.reduce((total, i) => total + series[i], 0) / middle.length;
  const note = `${overText(column, over)}: ${count(blocked.count)} samples, ${count(blocked.effective)} effective; normal scatter assumed`;
  const u = blocked.u * Math.sqrt(Math.PI / 2);
  const found = { value: at(gathered.values), u, dof: blocked.dof, blockLength: blocked.blockLength, note };
  const terms = shared(column, (c) => at(pick(c, gathered)), 1);
  return statistic('median', column, over, gathered, found, terms, {
    dimension: column.dimension,
    scale: column.scale,
    hint: column.hint,
  });
}

export function averagedOfTwo(column: Column, over: Over, cache: StatisticsCache, name: string): Averaged {
  const averaged = cache.averaged(column.values, over, column.label);
  if (averaged.blocked.count < 2) throw needTwo(column, name);
  return averaged;
}

export function countOf(column: Column, over: Over): Scalar {
  return plain(gather(column.values, over, column.label).values.length);
}

/** Smallest (sign −1) or largest (sign 1) sample. The scatter of an extreme is not known; only shared inputs count. */
export function extremeOf(column: Column, over: Over, sign: 1 | -1, warn: (sentence: string) => void): Scalar {
  const { values, rows } = gather(column.values, over, column.label);
  let best = 0;
  for (let i = 1; i < values.length; i++) if (sign * (values[i] - values[best]) > 0) best = i;
  const name = sign === 1 ? 'largest' : 'smallest';
  warn(
    `The ${name} sample of ${overText(column, over)} carries the uncertainty of offset and gain only, not of its scatter.`,
  );
  const row = rows[best];
  const { dimension, scale, hint } = column;
  return {
    kind: 'scalar',
    value: values[best],
    dimension,
    scale,
    hint,
    terms: shared(column, (c) => c[row], 1),
  };
}
