import { ColumnStats } from './column-stats';
import type { Layout } from './layout';
import { decideLayout } from './layout';
import type { Encoding, ParsedTrace } from './parsed-trace';
import { TraceFormatError } from './parsed-trace';
import type { BlockSink } from './rows';
import { RowReader } from './rows';
import { binaryKind } from './signature';

/** The layout is decided from this much of the file, or more while no line of numbers has come. */
const firstBlock = 64 * 1024;
/** A file without a line of numbers, or without a line's end, within this much is given up. */
const patience = 1 << 20;
const NEWLINE = 10;

/**
 * Reads a table of numbers from a text file, chunk by chunk, in time linear in the file and memory independent of it.
 *
 * `sink` receives the samples in blocks; a column of words comes as NaN throughout, a missing sample as NaN. Feed chunks of
 * any size with `push`, then call `finish` for everything else that is known about the file.
 *
 * @throws TraceFormatError with a sentence for the person who attached the file
 */
export class TextTraceParser {
  private carry: Uint8Array = new Uint8Array(0);
  private started = false;
  private encoding: Encoding = 'utf-8';
  private byteOrderMark = false;
  private wide: TextDecoder | null = null;
  private returnsOnly = false;
  private reader: RowReader | null = null;
  private layout: Layout | null = null;
  private stats: ColumnStats[] = [];
  private total = 0;
  private decideAt = firstBlock;
  private readonly notUtf8: number[] = [];
  private readonly strict = new TextDecoder('utf-8', { fatal: true });
  private readonly western = new TextDecoder('windows-1252');

  constructor(private readonly sink: BlockSink) {}

  push(chunk: Uint8Array): void {
    if (chunk.length === 0) return;
    this.total += chunk.length;
    if (this.reader) return this.readLines(this.widen(chunk, false));
    this.carry =
      this.carry.length === 0 ? chunk.slice() : concat(this.carry, this.started ? this.widen(chunk, false) : chunk);
    if (!this.started) {
      if (this.carry.length < 16) return;
      this.start();
    }
    if (this.carry.length >= this.decideAt) {
      // Doubling keeps the tries few while a long preamble passes.
      this.decideAt = this.carry.length * 2;
      this.decide(false);
    }
  }

  finish(): ParsedTrace {
    if (this.total === 0)
      throw new TraceFormatError('The file is empty: it has no bytes. Attach the file that holds the samples.');
    if (!this.started) this.start();
    const tail = this.widen(new Uint8Array(0), true);
    if (tail.length > 0) {
      if (this.reader) this.readLines(tail);
      else this.carry = concat(this.carry, tail);
    }
    if (!this.reader) this.decide(true);
    const { reader, layout } = this as unknown as { reader: RowReader; layout: Layout };
    if (this.carry.length > 0) {
      const last = concat(this.carry, Uint8Array.of(NEWLINE));
      this.carry = new Uint8Array(0);
      reader.read(last, 0, last.length);
    }
    reader.finish();
    const notes = [...layout.notes];
    if (reader.infinite > 0) notes.push(`${reader.infinite} infinite or overflowing values were read as missing.`);
    for (const line of this.notUtf8.slice(0, 5)) {
      notes.push(`Line ${line} is not valid UTF-8 and was read as Windows-1252; check its µ, ° and Ω.`);
    }
    if (this.notUtf8.length > 0 && this.encoding === 'utf-8') this.encoding = 'windows-1252';
    return {
      dialect: {
        encoding: this.encoding,
        byteOrderMark: this.byteOrderMark,
        delimiter: layout.delimiter,
        decimal: layout.decimal,
        decided: layout.decided,
      },
      comments: layout.comments.concat(reader.comments),
      commentsCut: reader.commentsCut,
      columns: layout.columns.map((column, i) => {
        const { missing, min, max, direction } = this.stats[i] as ColumnStats;
        return { ...column, missing, min, max, direction };
      }),
      rows: reader.rows,
      notes,
    };
  }

  private start(): void {
    this.started = true;
    const head = this.carry;
    const binary = binaryKind(head);
    if (binary) {
      throw new TraceFormatError(
        `The file is ${binary}, not a table of numbers in text. Its bytes are kept; export the samples as text and attach that file.`,
      );
    }
    if ((head[0] === 0xff && head[1] === 0xfe) || (head[0] === 0xfe && head[1] === 0xff)) {
      this.encoding = head[0] === 0xff ? 'utf-16le' : 'utf-16be';
      this.byteOrderMark = true;
      this.wide = new TextDecoder(this.encoding);
      this.carry = this.widen(head, false);
    } else if (head[0] === 0xef && head[1] === 0xbb && head[2] === 0xbf) {
      this.byteOrderMark = true;
      this.carry = head.slice(3);
    }
  }

  /** UTF-16 becomes UTF-8 on the way in; everything else passes through. */
  private widen(chunk: Uint8Array, last: boolean): Uint8Array {
    if (!this.wide) return chunk;
    return new TextEncoder().encode(this.wide.decode(chunk, { stream: !last }));
  }

  private decide(atEnd: boolean): void {
    const bytes = this.carry;
    const nul = bytes.indexOf(0);
    if (nul >= 0) {
      throw new TraceFormatError(
        `The file has a NUL byte at position ${nul + 1}: it is no text, is damaged, or is UTF-16 without its mark. Save it as UTF-8 text and attach it again.`,
      );
    }
    this.returnsOnly = bytes.indexOf(NEWLINE) < 0 && bytes.indexOf(13) >= 0;
    if (this.returnsOnly) turnReturns(bytes);
    const end = atEnd ? bytes.length : bytes.lastIndexOf(NEWLINE) + 1;
    const lines: string[] = [];
    const starts: number[] = [];
    for (let from = 0; from < end;) {
      const at = bytes.indexOf(NEWLINE, from);
      const to = at < 0 || at >= end ? end : at;
      starts.push(from);
      lines.push(this.decode(bytes.subarray(from, bytes[to - 1] === 13 && to > from ? to - 1 : to), lines.length + 1));
      from = to + 1;
    }
    const layout = end > 0 ? decideLayout(lines) : null;
    if (!layout) {
      this.notUtf8.length = 0;
      if (atEnd)
        throw new TraceFormatError(
          'The file holds no line of numbers. Its bytes are kept; attach the file that holds the samples.',
        );
      if (bytes.length < patience) return;
      throw new TraceFormatError(
        end === 0
          ? 'The first line is longer than 1 MiB, which no table of samples has. If the rows are the columns, transpose the file.'
          : 'The first 1 MiB of the file holds no line of numbers.',
      );
    }
    this.layout = layout;
    this.stats = layout.columns.map(() => new ColumnStats());
    const forward: BlockSink = (block, rows) => {
      for (let i = 0; i < block.length; i += 1) (this.stats[i] as ColumnStats).add(block[i] as Float64Array, rows);
      this.sink(block, rows);
    };
    this.reader = new RowReader(layout, layout.firstDataLine + 1, forward, (part, line) => this.decode(part, line));
    this.carry = new Uint8Array(0);
    this.readLines(bytes.subarray(starts[layout.firstDataLine] as number));
  }

  private readLines(chunk: Uint8Array): void {
    if (this.returnsOnly) {
      chunk = chunk.slice();
      turnReturns(chunk);
    }
    const reader = this.reader as RowReader;
    const end = chunk.lastIndexOf(NEWLINE) + 1;
    if (end === 0) {
      this.carry = concat(this.carry, chunk);
      if (this.carry.length > patience) {
        throw new TraceFormatError(
          `Line ${reader.nextLine} is longer than 1 MiB, which no table of samples has.`,
          reader.nextLine,
        );
      }
      return;
    }
    let from = 0;
    if (this.carry.length > 0) {
      from = chunk.indexOf(NEWLINE) + 1;
      const joined = concat(this.carry, chunk.subarray(0, from));
      reader.read(joined, 0, joined.length);
    }
    reader.read(chunk, from, end);
    this.carry = chunk.slice(end);
  }

  private decode(bytes: Uint8Array, line: number): string {
    try {
      return this.strict.decode(bytes);
    } catch {
      // Not swallowed: the line is named in the notes, and Windows-1252 gives every byte a letter.
      if (this.notUtf8[this.notUtf8.length - 1] !== line && this.notUtf8.length < 1000) this.notUtf8.push(line);
      return this.western.decode(bytes);
    }
  }
}

function concat(a: Uint8Array, b: Uint8Array): Uint8Array {
  const out = new Uint8Array(a.length + b.length);
  out.set(a);
  out.set(b, a.length);
  return out;
}

function turnReturns(bytes: Uint8Array): void {
  for (let i = 0; i < bytes.length; i += 1) if (bytes[i] === 13) bytes[i] = NEWLINE;
}

/** Collects the blocks of a parser into one array per column; for files that fit into memory. */
export class ColumnCollector {
  private columns: Float64Array[] = [];
  private rows = 0;

  readonly sink: BlockSink = (block, rows) => {
    if (this.columns.length === 0) this.columns = block.map(() => new Float64Array(rows));
    const needed = this.rows + rows;
    if (needed > (this.columns[0] as Float64Array).length) {
      const size = Math.max(needed, (this.columns[0] as Float64Array).length * 2);
      this.columns = this.columns.map((old) => {
        const grown = new Float64Array(size);
        grown.set(old);
        return grown;
      });
    }
    for (let i = 0; i < block.length; i += 1) {
      (this.columns[i] as Float64Array).set((block[i] as Float64Array).subarray(0, rows), this.rows);
    }
    this.rows = needed;
  };

  result(): Float64Array[] {
    return this.columns.map((column) => column.subarray(0, this.rows));
  }
}

/** Reads a whole file that is in memory already. */
export function parseTextTrace(bytes: Uint8Array): { trace: ParsedTrace; columns: Float64Array[] } {
  const collector = new ColumnCollector();
  const parser = new TextTraceParser(collector.sink);
  const step = 1 << 20;
  for (let from = 0; from < bytes.length; from += step)
    parser.push(bytes.subarray(from, Math.min(bytes.length, from + step)));
  return { trace: parser.finish(), columns: collector.result() };
}
