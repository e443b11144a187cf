import type { Direction } from '@/lib/trace-format/parsed-trace';
import type { PyramidLevel } from './pyramid';
import { buildPyramid, groupEntries } from './pyramid';

/** Where a column's samples and its pyramid are read from: memory here, files on the server. */
export type SampleSource = {
  rows: number;
  direction: Direction;
  /** Rows per entry and number of entries, finest level first. */
  levels: { bucket: number; count: number }[];
  samples: (from: number, to: number) => Float64Array | Promise<Float64Array>;
  samplesAt: (rows: number[]) => Float64Array | Promise<Float64Array>;
  /** Entries `from` to `to` of a level, min and max in turn. */
  entries: (level: number, from: number, to: number) => Float64Array | Promise<Float64Array>;
};

/**
 * What a plot draws. `rows`: every sample, min and max equal. `buckets`: least and greatest sample of `step` rows each, in
 * ascending x. `sampled`: every `step`-th row in the order of the file, because x goes to and fro there; extremes may be
 * missing. NaN stands for a gap.
 */
export type PlotView = {
  kind: 'rows' | 'buckets' | 'sampled';
  step: number;
  /** Rows of the file that the view covers, `to` excluded. */
  from: number;
  to: number;
  x: Float64Array;
  min: Float64Array;
  max: Float64Array;
};

export type ViewRange = { from: number | null; to: number | null; pixels: number };

/** Up to this many points per pixel are sent as they are. */
const density = 2;

export function memorySource(
  samples: Float64Array,
  direction: Direction,
  pyramid: PyramidLevel[] = buildPyramid(samples),
): SampleSource {
  return {
    rows: samples.length,
    direction,
    levels: pyramid.map(({ bucket, entries }) => ({ bucket, count: entries.length / 2 })),
    samples: (from, to) => samples.subarray(from, to),
    samplesAt: (rows) => Float64Array.from(rows, (row) => samples[row] as number),
    entries: (level, from, to) => (pyramid[level] as PyramidLevel).entries.subarray(2 * from, 2 * to),
  };
}

/** Row numbers from 0 as an axis of their own, for a column that is plotted against nothing. */
export function rowNumberSource(rows: number): SampleSource {
  const ramp = (from: number, to: number) => Float64Array.from({ length: Math.max(0, to - from) }, (_, i) => from + i);
  const levels = buildLevelCounts(rows);
  return {
    rows,
    direction: 'increasing',
    levels,
    samples: ramp,
    samplesAt: (at) => Float64Array.from(at),
    entries: (level, from, to) => {
      const bucket = (levels[level] as { bucket: number }).bucket;
      const out = new Float64Array(2 * (to - from));
      for (let i = from; i < to; i += 1) {
        out[2 * (i - from)] = i * bucket;
        out[2 * (i - from) + 1] = Math.min(rows, (i + 1) * bucket) - 1;
      }
      return out;
    },
  };
}

/** Levels of a pyramid over so many rows, without its entries. */
export function buildLevelCounts(rows: number): { bucket: number; count: number }[] {
  const levels = [{ bucket: 16, count: Math.ceil(rows / 16) }];
  for (let last = levels[0] as { bucket: number; count: number }; last.count > 64;) {
    last = { bucket: last.bucket * 4, count: Math.ceil(last.count / 4) };
    levels.push(last);
  }
  return levels;
}

/** First row whose x is not before `value` in the direction of the samples. */
async function firstRow(source: SampleSource, value: number, strictly: boolean): Promise<number> {
  const falling = source.direction === 'decreasing';
  let low = 0;
  let high = source.rows;
  while (low < high) {
    const middle = (low + high) >>> 1;
    const [x] = (await source.samplesAt([middle])) as unknown as [number];
    const before = falling ? (strictly ? x >= value : x > value) : strictly ? x <= value : x < value;
    if (before) low = middle + 1;
    else high = middle;
  }
  return low;
}

/**
 * A view of one column against another.
 *
 * Where x only rises or only falls, reads O(pixels) entries of the pyramid; otherwise falls back on row order, with whole
 * buckets outside the range left out.
 */
export async function plotView(x: SampleSource, y: SampleSource, range: ViewRange): Promise<PlotView> {
  const pixels = Math.max(16, Math.min(8192, Math.round(range.pixels)));
  if (x.direction === 'neither') return scatteredView(x, y, range, pixels);
  let from = 0;
  let to = y.rows;
  if (range.from !== null && range.to !== null) {
    const falling = x.direction === 'decreasing';
    from = await firstRow(x, falling ? range.to : range.from, false);
    to = await firstRow(x, falling ? range.from : range.to, true);
    // One row more on each side, so that the line runs out of the frame instead of ending inside it.
    from = Math.max(0, from - 1);
    to = Math.min(y.rows, Math.max(to, from) + 1);
  }
  const view = await orderedView(x, y, from, to, pixels);
  if (x.direction === 'decreasing') for (const part of [view.x, view.min, view.max]) part.reverse();
  return view;
}

async function orderedView(
  x: SampleSource,
  y: SampleSource,
  from: number,
  to: number,
  pixels: number,
): Promise<PlotView> {
  const rows = to - from;
  if (rows <= density * pixels) {
    const samples = Float64Array.from(await y.samples(from, to));
    return {
      kind: 'rows',
      step: 1,
      from,
      to,
      x: Float64Array.from(await x.samples(from, to)),
      min: samples,
      max: samples.slice(),
    };
  }
  // The coarsest level that still has an entry per pixel.
  let level = 0;
  while (level + 1 < y.levels.length && rows / (y.levels[level + 1] as { bucket: number }).bucket >= pixels) level += 1;
  const { bucket } = y.levels[level] as { bucket: number };
  const first = Math.floor(from / bucket);
  const last = Math.ceil(to / bucket);
  const group = Math.max(1, Math.ceil((last - first) / pixels));
  const ys = groupEntries(await y.entries(level, first, last), group);
  const xs = groupEntries(await x.entries(level, first, last), group);
  const count = ys.length / 2;
  const out = { x: new Float64Array(count), min: new Float64Array(count), max: new Float64Array(count) };
  for (let i = 0; i < count; i += 1) {
    out.x[i] = ((xs[2 * i] as number) + (xs[2 * i + 1] as number)) / 2;
    out.min[i] = ys[2 * i] as number;
    out.max[i] = ys[2 * i + 1] as number;
  }
  return { kind: 'buckets', step: bucket * group, from: first * bucket, to: Math.min(y.rows, last * bucket), ...out };
}

async function scatteredView(x: SampleSource, y: SampleSource, range: ViewRange, pixels: number): Promise<PlotView> {
  const parts = await partsInRange(x, range, pixels);
  const rows = parts.reduce((sum, [from, to]) => sum + to - from, 0);
  const step = Math.max(1, Math.ceil(rows / (density * pixels)));
  const at: number[] = [];
  // -1 marks a gap between parts that do not touch.
  for (const [from, to] of parts) {
    if (at.length > 0) at.push(-1);
    for (let row = from; row < to; row += step) at.push(row);
  }
  const wanted = at.map((row) => Math.max(0, row));
  const blank = (samples: Float64Array) => samples.map((value, i) => (at[i] === -1 ? NaN : value));
  const samples = blank(await y.samplesAt(wanted));
  return {
    kind: step === 1 ? 'rows' : 'sampled',
    step,
    from: parts[0]?.[0] ?? 0,
    to: parts[parts.length - 1]?.[1] ?? 0,
    x: blank(await x.samplesAt(wanted)),
    min: samples,
    max: samples.slice(),
  };
}

/** Runs of rows whose buckets of x overlap the range; all rows where no range is asked for. */
async function partsInRange(x: SampleSource, { from, to }: ViewRange, pixels: number): Promise<[number, number][]> {
  if (from === null || to === null) return x.rows > 0 ? [[0, x.rows]] : [];
  let parts: [number, number][] = [[0, x.rows]];
  for (let level = x.levels.length - 1; level >= 0; level -= 1) {
    const { bucket } = x.levels[level] as { bucket: number };
    const cost = parts.reduce((sum, part) => sum + (part[1] - part[0]) / bucket, 0);
    // Finer levels only narrow the parts; they are read while that stays proportional to the pixels.
    if (cost > 4 * pixels) return parts;
    const narrower: [number, number][] = [];
    for (const part of parts) {
      const first = Math.floor(part[0] / bucket);
      const last = Math.ceil(part[1] / bucket);
      const entries = await x.entries(level, first, last);
      for (let i = 0; i < last - first; i += 1) {
        if (!((entries[2 * i] as number) <= to && (entries[2 * i + 1] as number) >= from)) continue;
        const start = (first + i) * bucket;
        const end = Math.min(x.rows, start + bucket);
        const previous = narrower[narrower.length - 1];
        if (previous && previous[1] === start) previous[1] = end;
        else narrower.push([start, end]);
      }
    }
    parts = narrower;
  }
  return parts;
}

/** Views travel as one binary answer: 4 little-endian uint32 (kind, step, from, to), then x, min, max as Float64. */
const kinds = ['rows', 'buckets', 'sampled'] as const;

export function encodeView(view: PlotView): Uint8Array<ArrayBuffer> {
  const n = view.x.length;
  const out = new ArrayBuffer(16 + 24 * n);
  new Uint32Array(out, 0, 4).set([kinds.indexOf(view.kind), view.step, view.from, view.to]);
  const body = new Float64Array(out, 16);
  body.set(view.x);
  body.set(view.min, n);
  body.set(view.max, 2 * n);
  return new Uint8Array(out);
}

export function decodeView(bytes: ArrayBuffer): PlotView {
  const [kind, step, from, to] = new Uint32Array(bytes, 0, 4) as unknown as [number, number, number, number];
  const body = new Float64Array(bytes, 16);
  const n = body.length / 3;
  if (!Number.isInteger(n) || !kinds[kind]) throw new RangeError('The plot data arrived incomplete. Reload the plot.');
  return { kind: kinds[kind], step, from, to, x: body.slice(0, n), min: body.slice(n, 2 * n), max: body.slice(2 * n) };
}
