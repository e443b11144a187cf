import { splitCells } from './cells';
import type { Layout } from './layout';
import { isInfinite, isMissing, parseNumber, powersOfTen } from './number';
import { TraceFormatError } from './parsed-trace';

/** Called with each full block: one array per column, of which the first `rows` samples count. The arrays are used again. */
export type BlockSink = (block: Float64Array[], rows: number) => void;

/** 8 MiB of samples per block, whatever the number of columns. */
const samplesPerBlock = 1 << 20;
const maxComments = 2000;
const NEWLINE = 10;
const RETURN = 13;
const SPACE = 32;
const TAB = 9;

/** Reads lines of numbers from bytes into typed columns; the hot loop of the parser. */
export class RowReader {
  rows = 0;
  infinite = 0;
  commentsCut = false;
  readonly comments: string[] = [];
  private line: number;
  private readonly block: Float64Array[];
  private readonly capacity: number;
  private filled = 0;

  constructor(
    private readonly layout: Layout,
    firstLine: number,
    private readonly sink: BlockSink,
    private readonly decode: (bytes: Uint8Array, line: number) => string,
  ) {
    this.line = firstLine;
    this.capacity = Math.max(1024, Math.floor(samplesPerBlock / layout.columns.length));
    this.block = layout.columns.map(() => new Float64Array(this.capacity));
  }

  /** Number of the line that comes next. */
  get nextLine(): number {
    return this.line;
  }

  /** Reads whole lines: `bytes[end - 1]` must be a line feed. */
  read(bytes: Uint8Array, from: number, end: number): void {
    const { delimiter: mark, decimal: decimalMark } = this.layout;
    const blanks = mark === ' ';
    const delimiter = mark.charCodeAt(0);
    const decimal = decimalMark.charCodeAt(0);
    const columns = this.block.length;
    const block = this.block;
    const capacity = this.capacity;
    let row = this.filled;
    let line = this.line;
    let i = from;

    while (i < end) {
      const lineStart = i;
      let byte = bytes[i] as number;
      while (byte === SPACE || (byte === TAB && (blanks || delimiter !== TAB))) byte = bytes[++i] as number;
      if (
        byte === NEWLINE ||
        byte === RETURN ||
        byte === 35 ||
        byte === 37 ||
        byte === 47 ||
        (byte === 59 && delimiter !== 59)
      ) {
        const lineEnd = endOfLine(bytes, i, end);
        if (this.skipsLine(bytes, i, lineEnd, line)) {
          i = lineEnd + 1;
          line += 1;
          continue;
        }
      }
      if (row === capacity) {
        this.sink(block, row);
        row = 0;
      }

      let column = 0;
      for (;;) {
        // One cell, starting at a byte that is no blank.
        const cellStart = i;
        let negative = false;
        byte = bytes[i] as number;
        if (byte === 45) {
          negative = true;
          byte = bytes[++i] as number;
        } else if (byte === 43) {
          byte = bytes[++i] as number;
        }
        let mantissa = 0;
        let power = 0;
        const digitsFrom = i;
        let digit = byte - 48;
        while (digit >= 0 && digit <= 9) {
          mantissa = mantissa * 10 + digit;
          digit = (bytes[++i] as number) - 48;
        }
        let digits = i - digitsFrom;
        if (bytes[i] === decimal) {
          const fractionFrom = ++i;
          digit = (bytes[i] as number) - 48;
          while (digit >= 0 && digit <= 9) {
            mantissa = mantissa * 10 + digit;
            digit = (bytes[++i] as number) - 48;
          }
          power = fractionFrom - i;
          digits -= power;
          // `1,` is no number with a decimal comma.
          if (power === 0 && decimal === 44) digits = 0;
        }
        byte = bytes[i] as number;
        // e, E, d, D
        if (digits > 0 && ((byte | 32) === 101 || (byte | 32) === 100)) {
          byte = bytes[++i] as number;
          let down = false;
          if (byte === 45) {
            down = true;
            byte = bytes[++i] as number;
          } else if (byte === 43) {
            byte = bytes[++i] as number;
          }
          const exponentFrom = i;
          let exponent = 0;
          digit = byte - 48;
          while (digit >= 0 && digit <= 9) {
            if (exponent < 10000) exponent = exponent * 10 + digit;
            digit = (bytes[++i] as number) - 48;
          }
          if (i === exponentFrom) digits = 0;
          power += down ? -exponent : exponent;
          byte = bytes[i] as number;
        }
        const numberEnd = i;
        while (byte === SPACE || (blanks && byte === TAB)) byte = bytes[++i] as number;
        const closed = byte === NEWLINE || byte === RETURN || (blanks ? i > numberEnd : byte === delimiter);

        let value: number;
        if (closed && digits > 0 && mantissa <= 9007199254740991 && power >= -22 && power <= 22) {
          value = power < 0 ? mantissa / (powersOfTen[-power] as number) : mantissa * (powersOfTen[power] as number);
          if (negative) value = -value;
        } else {
          i = this.cellEnd(bytes, cellStart, line, blanks, delimiter);
          value = this.slowCell(bytes, cellStart, i, column, line);
          byte = bytes[i] as number;
          if (blanks) while (byte === SPACE || byte === TAB) byte = bytes[++i] as number;
        }
        if (column < columns) (block[column] as Float64Array)[row] = value;
        column += 1;
        if (byte === RETURN && bytes[i + 1] === NEWLINE) byte = bytes[++i] as number;
        if (byte === NEWLINE) break;
        if (byte === RETURN) this.fail(line, 'has a carriage return in the middle.');
        if (!blanks) {
          byte = bytes[++i] as number;
          while (byte === SPACE || (byte === TAB && delimiter !== TAB)) byte = bytes[++i] as number;
          if (byte === RETURN && bytes[i + 1] === NEWLINE) i += 1;
        }
      }
      i += 1;
      if (column !== columns && !(this.layout.trailingCell && column === columns + 1)) {
        this.refuseRagged(bytes.subarray(lineStart, i - 1), line, column);
      }
      row += 1;
      this.rows += 1;
      line += 1;
    }
    this.filled = row;
    this.line = line;
  }

  finish(): void {
    if (this.filled > 0) this.sink(this.block, this.filled);
    this.filled = 0;
  }

  /** Blank lines are passed over, comments are kept; false for a line of numbers. */
  private skipsLine(bytes: Uint8Array, from: number, lineEnd: number, line: number): boolean {
    const byte = bytes[from];
    if (byte === NEWLINE) return true;
    if (byte === RETURN) return lineEnd === from + 1;
    if (byte === 47 && bytes[from + 1] !== 47) return false;
    if (this.comments.length < maxComments) {
      this.comments.push(this.decode(bytes.subarray(from, lineEnd), line).trimEnd());
    } else {
      this.commentsCut = true;
    }
    return true;
  }

  private cellEnd(bytes: Uint8Array, from: number, line: number, blanks: boolean, delimiter: number): number {
    let i = from;
    if (bytes[i] === 34) {
      i += 1;
      while (bytes[i] !== 34) {
        if (bytes[i] === NEWLINE) this.fail(line, 'opens a quotation mark that is never closed.');
        i += 1;
      }
      i += 1;
    }
    for (;;) {
      const byte = bytes[i] as number;
      if (byte === NEWLINE || (byte === RETURN && bytes[i + 1] === NEWLINE)) return i;
      if (blanks ? byte === SPACE || byte === TAB : byte === delimiter) return i;
      i += 1;
    }
  }

  private slowCell(bytes: Uint8Array, from: number, to: number, column: number, line: number): number {
    const { columns, decimal, delimiter } = this.layout;
    const raw = this.decode(bytes.subarray(from, to), line).trim();
    const text = raw.startsWith('"') ? (splitCells(raw, delimiter === ' ' ? '\t' : delimiter, line)[0] ?? '') : raw;
    if (columns[column]?.text || isMissing(text)) return NaN;
    const value = parseNumber(text, decimal);
    // A number beyond the range of a double, like an overload written as a word, is no sample.
    if (value !== null && Number.isFinite(value)) return value;
    if (value !== null || isInfinite(text)) {
      this.infinite += 1;
      return NaN;
    }
    if (column >= columns.length) return NaN;
    if (text.includes('\0')) this.fail(line, 'holds a NUL byte: the file is damaged or is no text.');
    const shown = text.length > 40 ? `${text.slice(0, 40)}…` : text;
    const other = decimal === '.' ? ',' : '.';
    const hint =
      parseNumber(text, other) !== null
        ? ` The file was read with a decimal ${decimal === '.' ? 'point' : 'comma'}, and this number has the other mark.`
        : '';
    this.fail(
      line,
      `holds "${shown}" in column ${column + 1} (${(columns[column] as { header: string }).header}), which is not a number.${hint}`,
    );
  }

  private refuseRagged(bytes: Uint8Array, line: number, found: number): never {
    const expected = this.block.length;
    if (this.decode(bytes, line).includes('\0'))
      this.fail(line, 'holds a NUL byte: the file is damaged or is no text.');
    const count = `${found} ${found === 1 ? 'column' : 'columns'}`;
    throw new TraceFormatError(
      `Line ${line} has ${count} where the others have ${expected}. Correct it and attach the file again.`,
      line,
    );
  }

  private fail(line: number, what: string): never {
    throw new TraceFormatError(`Line ${line} ${what} Correct it and attach the file again.`, line);
  }
}

function endOfLine(bytes: Uint8Array, from: number, end: number): number {
  const at = bytes.indexOf(NEWLINE, from);
  return at < 0 || at >= end ? end - 1 : at;
}
