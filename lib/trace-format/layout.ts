import { splitCells } from './cells';
import { isUnitRow, splitHeader, splitLooseHeader, uniqueSymbols, unitOfCell } from './header';
import { isInfinite, isMissing, parseNumber } from './number';
import type { DecimalMark, Delimiter } from './parsed-trace';
import { TraceFormatError } from './parsed-trace';

/** Delimiter, decimal mark, header and units, decided from a file's first block. */

export const maxColumns = 256;

export type LayoutColumn = { header: string; name: string; symbol: string; unit: string | null; text: boolean };

export type Layout = {
  delimiter: Delimiter;
  decimal: DecimalMark;
  decided: string;
  columns: LayoutColumn[];
  /** Index of the first line of numbers within the block. */
  firstDataLine: number;
  /** Every line of numbers ends with one more, empty cell. */
  trailingCell: boolean;
  comments: string[];
  notes: string[];
};

type Candidate = {
  delimiter: Delimiter;
  decimal: DecimalMark;
  /** Cells of each examined line, null where it is no line of numbers. */
  cells: (string[] | null)[];
  columns: number;
  lines: number;
  numbers: number;
  headerAgrees: boolean;
};

/** Enough lines to see a decimal comma, missing values and a text column; more would only cost time. */
const examined = 400;

const candidates: [Delimiter, DecimalMark][] = [
  ['\t', '.'],
  [';', '.'],
  [',', '.'],
  [' ', '.'],
  ['\t', ','],
  [';', ','],
  [' ', ','],
];

/** Whether a line is a comment: `#`, `%` or `//` after blanks. */
export function isComment(line: string): boolean {
  return /^[ \t]*(?:#|%|\/\/)/.test(line);
}

function isNumeric(cell: string, decimal: DecimalMark): boolean {
  return parseNumber(cell, decimal) !== null;
}

/** In the strict sense every cell is a number or missing; in the loose one at least one of two or more is a number. */
function isDataLine(cells: string[], decimal: DecimalMark, strict: boolean): boolean {
  let numbers = 0;
  let words = 0;
  let said = 0;
  for (const cell of cells) {
    if (isNumeric(cell, decimal)) numbers += 1;
    else if (!isMissing(cell) && !isInfinite(cell)) words += 1;
    if (cell !== '') said += 1;
  }
  return strict ? words === 0 && said > 0 : numbers > 0 && cells.length > 1;
}

function consider(lines: string[], delimiter: Delimiter, decimal: DecimalMark, strict: boolean): Candidate {
  const counts = new Map<number, number>();
  const cells = lines.map((line, index) => {
    if (isComment(line) || line.trim() === '') return null;
    let row: string[];
    try {
      row = splitCells(line, delimiter, index + 1);
    } catch (error) {
      // A lone quotation mark is reported once the layout is known; here the line only counts for nothing.
      if (error instanceof TraceFormatError) return null;
      throw error;
    }
    if (!isDataLine(row, decimal, strict)) return null;
    counts.set(row.length, (counts.get(row.length) ?? 0) + 1);
    return row;
  });
  let columns = 0;
  let most = 0;
  for (const [count, times] of counts) if (times > most) [columns, most] = [count, times];
  const numbers = cells.flat().filter((cell) => cell !== null && isNumeric(cell, decimal)).length;
  const candidate = { delimiter, decimal, cells, columns, lines: most, numbers, headerAgrees: false };
  if (most > 0) candidate.headerAgrees = headerAgrees(lines, candidate);
  return candidate;
}

function holdsNames(row: string[]): boolean {
  return row.some((cell) => isWord(cell) && !isNumeric(cell, '.') && !isNumeric(cell, ','));
}

function headerAgrees(lines: string[], { cells, columns, delimiter, decimal }: Candidate): boolean {
  const first = cells.findIndex((row) => row?.length === columns);
  for (let i = first - 1; i >= 0; i -= 1) {
    const line = lines[i] as string;
    if (line.trim() === '') continue;
    if (isComment(line)) return splitLooseHeader(withoutMark(line), columns, delimiter) !== null;
    // `t,I` above `0,1` names two columns; it does not name one that has a decimal comma.
    if (columns === 1 && decimal === ',' && line.replace(/"[^"]*"/g, '').includes(',')) return false;
    try {
      const row = splitCells(line, delimiter, i + 1);
      if (!holdsNames(row)) return false;
      return row.length === columns || (row.length === columns - 1 && cells[first]?.[columns - 1] === '');
    } catch (error) {
      if (error instanceof TraceFormatError) return false;
      throw error;
    }
  }
  return false;
}

function withoutMark(comment: string): string {
  return comment.trim().replace(/^(?:#+|%+|\/\/+)/, '');
}

function better(a: Candidate, b: Candidate): boolean {
  if (a.lines !== b.lines) return a.lines > b.lines;
  if (a.headerAgrees !== b.headerAgrees) return a.headerAgrees;
  if (a.numbers !== b.numbers) return a.numbers > b.numbers;
  return a.columns > b.columns;
}

function choose(lines: string[], strict: boolean): { best: Candidate; all: Candidate[] } | null {
  const all = candidates.map(([delimiter, decimal]) => consider(lines, delimiter, decimal, strict));
  const commas = all.find(({ delimiter, lines: count }) => delimiter === ',' && count > 0);
  // Without a header that says so, a lone `1,5` is not taken for one number: its lines would swallow a missing cell.
  const open = all.filter(
    ({ columns, decimal, headerAgrees: agrees }) => !(commas && columns === 1 && decimal === ',' && !agrees),
  );
  const best = open.reduce((a, b) => (better(b, a) ? b : a));
  return best.lines > 0 ? { best, all } : null;
}

const delimiterNames: Record<Delimiter, string> = { ',': 'commas', ';': 'semicolons', '\t': 'tabs', ' ': 'blanks' };

/**
 * Decides how a file is laid out from its first lines.
 *
 * @param lines lines without their ends; the first is line 1 of the file
 * @returns null where no line of numbers has been seen yet
 * @throws TraceFormatError for a table that contradicts itself, with the line
 */
export function decideLayout(lines: string[]): Layout | null {
  const start = firstCandidateLine(lines);
  const window = lines.slice(0, start + examined);
  const chosen = choose(window, true) ?? choose(window, false);
  if (!chosen) return null;
  const { best, all } = chosen;
  if (best.columns > maxColumns) {
    throw new TraceFormatError(
      `The file has ${best.columns} columns; a trace takes up to ${maxColumns}. Split it, or transpose it if its rows are the columns.`,
    );
  }
  const notes: string[] = [];
  const firstDataLine = best.cells.findIndex((row) => row?.length === best.columns);
  const sample = best.cells.filter((row): row is string[] => row?.length === best.columns);
  const head = readHead(lines, firstDataLine, best, notes);
  const trailingCell =
    best.delimiter !== ' ' &&
    best.columns > 1 &&
    sample.every((row) => row[best.columns - 1] === '') &&
    (head.names === null || head.names.length < best.columns || head.names[best.columns - 1] === '');
  const count = trailingCell ? best.columns - 1 : best.columns;
  noteAmbiguities(best, all, sample, notes);
  const names = head.names ?? Array.from({ length: count }, (_, i) => `column ${i + 1}`);
  if (head.names === null) notes.push('The file names no columns; they are numbered.');
  const split = names.slice(0, count).map((header, i) => {
    const own = splitHeader(header);
    const below = head.units?.[i];
    if (head.units === null || below === undefined) return { header, ...own };
    const unit = unitOfCell(below);
    return unit === null ? { header, ...own } : { header, name: own.unit === unit ? own.name : header, unit };
  });
  const symbols = uniqueSymbols(split.map(({ name, header }) => (head.names === null ? '' : name || header)));
  const columns = split.map((column, i) => ({
    ...column,
    symbol: symbols[i] as string,
    text:
      sample.every((row) => !isNumeric(row[i] as string, best.decimal)) &&
      sample.some((row) => isWord(row[i] as string)),
  }));
  for (const column of columns) {
    if (column.text) notes.push(`Column "${column.header}" holds words, not numbers; it is left out of the samples.`);
  }
  const separated = count === 1 ? 'One column' : `${count} columns parted by ${delimiterNames[best.delimiter]}`;
  const marks = sample.some((row) => row.some((cell) => cell.includes(best.decimal))) ? '' : ' (no number has one)';
  const decided = `${separated}, decimal ${best.decimal === '.' ? 'point' : 'comma'}${marks}, from ${best.lines} of the first lines.`;
  return {
    delimiter: best.delimiter,
    decimal: best.decimal,
    decided,
    columns,
    firstDataLine,
    trailingCell,
    comments: head.comments,
    notes,
  };
}

function isWord(cell: string): boolean {
  return !isMissing(cell) && !isInfinite(cell);
}

/** A long preamble must not push the numbers out of the examined window. */
function firstCandidateLine(lines: string[]): number {
  const at = lines.findIndex((line) => !isComment(line) && /^[ \t]*["+\-.,−]?[0-9.]/.test(line));
  return at < 0 ? 0 : at;
}

function noteAmbiguities(best: Candidate, all: Candidate[], sample: string[][], notes: string[]): void {
  const single = all.find(({ columns, decimal, lines }) => decimal === ',' && columns === 1 && lines === best.lines);
  if (best.delimiter === ',' && best.columns === 2 && single && !best.headerAgrees) {
    notes.push(
      '`1,5` was read as two columns, not as a decimal comma. Put a header line above the numbers to settle it.',
    );
  }
  if (best.decimal === ',') {
    const marked = sample.flat().filter((cell) => cell.includes(','));
    if (marked.length > 0 && marked.every((cell) => /^[+-]?[1-9][0-9]{0,2},[0-9]{3}$/.test(cell))) {
      notes.push(
        'Every comma stands before three digits and was read as a decimal comma, not as a thousands separator.',
      );
    }
  }
}

type Head = { names: string[] | null; units: string[] | null; comments: string[] };

function readHead(lines: string[], firstDataLine: number, layout: Candidate, notes: string[]): Head {
  const { columns, delimiter } = layout;
  const above = lines.slice(0, firstDataLine).map((text, index) => ({ text, index }));
  const filled = above.filter(({ text }) => text.trim() !== '');
  const comments = filled.filter(({ text }) => isComment(text));
  const plain = filled.filter(({ text }) => !isComment(text));
  const firstRow = layout.cells[firstDataLine] as string[];
  const fits = (row: string[]) =>
    row.length === columns || (row.length === columns - 1 && firstRow[columns - 1] === '');

  const cellsOf = ({ text, index }: { text: string; index: number }) => {
    const row = splitCells(text, delimiter, index + 1);
    return fits(row) ? row : (splitLooseHeader(text, columns, delimiter) ?? row);
  };
  const last = plain[plain.length - 1];
  if (last) {
    const row = cellsOf(last);
    const before = plain[plain.length - 2];
    const numbers = layout.cells[last.index];
    if (numbers && before && fits(cellsOf(before))) raggedHead(last.index + 1, numbers.length, columns);
    if (!numbers && fits(row) && !holdsNames(row)) {
      throw new TraceFormatError(
        `Line ${last.index + 1} and line ${firstDataLine + 1} write their decimal marks differently. Use one mark and attach the file again.`,
        last.index + 1,
      );
    }
    if (fits(row) && !numbers) {
      const namesRow = before && isUnitRow(row) ? cellsOf(before) : null;
      if (namesRow && fits(namesRow)) {
        return { names: namesRow, units: row, comments: kept(comments, plain.slice(0, -2)) };
      }
      return { names: row, units: null, comments: kept(comments, plain.slice(0, -1)) };
    }
    if (!numbers && row.length > 1) {
      throw new TraceFormatError(
        `Line ${last.index + 1} names ${row.length} columns, but line ${firstDataLine + 1} holds ${columns}. Make them agree and attach the file again.`,
        last.index + 1,
      );
    }
    notes.push(`Line ${last.index + 1} stands above the numbers and names no columns; it is kept as a comment.`);
    return { names: null, units: null, comments: kept(comments, plain) };
  }
  return { ...headFromComments(comments, columns, delimiter, notes), comments: kept(comments, []) };
}

function headFromComments(
  comments: { text: string; index: number }[],
  columns: number,
  delimiter: Delimiter,
  notes: string[],
): { names: string[] | null; units: string[] | null } {
  const loose = (at: number) => {
    const line = comments[comments.length - at];
    return line ? splitLooseHeader(withoutMark(line.text), columns, delimiter) : null;
  };
  const row = loose(1);
  if (!row || row.every((cell) => parseNumber(cell, '.') !== null)) return { names: null, units: null };
  const line = (comments[comments.length - 1] as { index: number }).index + 1;
  const before = isUnitRow(row) ? loose(2) : null;
  if (before) {
    notes.push(`Names and units were read from the comment lines ${line - 1} and ${line}.`);
    return { names: before, units: row };
  }
  // A single column would take any one-word comment for its name.
  if (columns === 1 && splitHeader(row[0] as string).unit === null) return { names: null, units: null };
  notes.push(`The names of the columns were read from the comment in line ${line}.`);
  return { names: row, units: null };
}

function kept(...groups: { text: string; index: number }[][]): string[] {
  return groups
    .flat()
    .sort((a, b) => a.index - b.index)
    .map(({ text }) => text);
}

function raggedHead(line: number, found: number, expected: number): never {
  throw new TraceFormatError(
    `Line ${line} has ${found} ${found === 1 ? 'column' : 'columns'} where the others have ${expected}. Correct it and attach the file again.`,
    line,
  );
}
