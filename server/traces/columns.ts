import 'server-only';
import fs from 'node:fs/promises';
import { buildLevelCounts, plotView, rowNumberSource, type PlotView, type SampleSource } from '@/lib/plot/view';
import { AppError } from '@/lib/errors/app-error';
import type { ParsedTrace } from '@/lib/trace-format/parsed-trace';
import { derivedFolder, ingestBlob, readFacts } from './ingest';
import { columnFile, pyramidFile } from './layout';

/** Reads samples and pyramids from the derived files. Columns are counted from 0 in the order of the file. */

const noColumn = () => new AppError('not_found', 'This file has no such column.');

/** Facts of a parsed file; derived files that were lost are made again first. */
export async function factsOf(sha256: string): Promise<ParsedTrace> {
  const known = await readFacts(sha256);
  if (known) return known;
  const result = await ingestBlob(sha256);
  if (!result.ok) throw new AppError('unavailable', result.problem);
  return result.trace;
}

async function readSamples(handle: fs.FileHandle, from: number, to: number): Promise<Float64Array> {
  const samples = new Float64Array(Math.max(0, to - from));
  const bytes = new Uint8Array(samples.buffer);
  let done = 0;
  while (done < bytes.length) {
    const { bytesRead } = await handle.read(bytes, done, bytes.length - done, from * 8 + done);
    if (bytesRead === 0) throw new Error('a column file is shorter than its trace');
    done += bytesRead;
  }
  return samples;
}

async function withFile<T>(file: string, read: (handle: fs.FileHandle) => Promise<T>): Promise<T> {
  const handle = await fs.open(file, 'r');
  try {
    return await read(handle);
  } finally {
    await handle.close();
  }
}

/**
 * All samples of a column, or rows `from` to `to` (excluded); NaN where missing.
 * @throws AppError not_found for a column that the file does not have.
 */
export async function readColumn(sha256: string, index: number, from = 0, to?: number): Promise<Float64Array> {
  const { rows, columns } = await factsOf(sha256);
  if (!Number.isInteger(index) || index < 0 || index >= columns.length) throw noColumn();
  const end = Math.min(rows, to ?? rows);
  return withFile(columnFile(derivedFolder(sha256), index), (handle) => readSamples(handle, Math.min(from, end), end));
}

/** Rows `from` to `from + count` of every column, null where a sample is missing. */
export async function readRows(
  sha256: string,
  from: number,
  count: number,
): Promise<{ from: number; total: number; rows: (number | null)[][] }> {
  const { rows: total, columns } = await factsOf(sha256);
  const start = Math.min(total, from);
  const end = Math.min(total, from + count);
  const parts = await Promise.all(columns.map((_, index) => readColumn(sha256, index, start, end)));
  const rows = Array.from({ length: end - start }, (_, row) =>
    parts.map((samples) => {
      const value = samples[row] as number;
      return Number.isNaN(value) ? null : value;
    }),
  );
  return { from: start, total, rows };
}

/**
 * What a plot of column `y` against column `x` (null: against the row number) shows, from the pyramid.
 * @throws AppError not_found
 */
export async function readView(
  sha256: string,
  wanted: { x: number | null; y: number; from: number | null; to: number | null; pixels: number },
): Promise<PlotView> {
  const trace = await factsOf(sha256);
  const opened: fs.FileHandle[] = [];
  try {
    const ys = await fileSource(sha256, trace, wanted.y, opened);
    const xs = wanted.x === null ? rowNumberSource(trace.rows) : await fileSource(sha256, trace, wanted.x, opened);
    return await plotView(xs, ys, wanted);
  } finally {
    await Promise.all(opened.map((handle) => handle.close()));
  }
}

async function fileSource(
  sha256: string,
  trace: ParsedTrace,
  index: number,
  opened: fs.FileHandle[],
): Promise<SampleSource> {
  const column = trace.columns[index];
  if (!column) throw noColumn();
  const folder = derivedFolder(sha256);
  const samples = await fs.open(columnFile(folder, index), 'r');
  opened.push(samples);
  const pyramid = await fs.open(pyramidFile(folder, index), 'r');
  opened.push(pyramid);
  const levels = buildLevelCounts(trace.rows);
  const starts: number[] = [];
  levels.reduce((at, { count }) => (starts.push(at), at + 2 * count), 0);
  return {
    rows: trace.rows,
    direction: column.direction,
    levels,
    samples: (from, to) => readSamples(samples, from, to),
    samplesAt: async (rows) => {
      const out = new Float64Array(rows.length);
      // Rows that follow one another are read in one piece.
      for (let i = 0; i < rows.length;) {
        let run = 1;
        while (i + run < rows.length && rows[i + run] === (rows[i] as number) + run) run += 1;
        out.set(await readSamples(samples, rows[i] as number, (rows[i] as number) + run), i);
        i += run;
      }
      return out;
    },
    entries: (level, from, to) =>
      readSamples(pyramid, (starts[level] as number) + 2 * from, (starts[level] as number) + 2 * to),
  };
}
