/** Comma-separated text (RFC 4180) that a spreadsheet opens without running anything in it. */

/** A cell is a number, a text, or null for nothing. Not-finite numbers are written as nothing. */
export type CsvCell = number | string | null;

const formulaStart = /^[=+\-@\t\r]/;
const plainNumber = /^[+-]?(?:[0-9]+\.?[0-9]*|\.[0-9]+)(?:[eE][+-]?[0-9]+)?$/;

/**
 * One cell. Text that a spreadsheet would take for a formula gets an apostrophe before it (OWASP, "CSV Injection");
 * a text that is nothing but a number, negative ones too, stays the number it is.
 */
export function csvCell(cell: CsvCell): string {
  if (cell === null) return '';
  if (typeof cell === 'number') return Number.isFinite(cell) ? String(cell) : '';
  const guarded = formulaStart.test(cell) && !plainNumber.test(cell) ? `'${cell}` : cell;
  return /[",\r\n\t;]/.test(guarded) || guarded !== guarded.trim() ? `"${guarded.replaceAll('"', '""')}"` : guarded;
}

/** One line with its end. */
export function csvRow(cells: CsvCell[]): string {
  return `${cells.map(csvCell).join(',')}\r\n`;
}

/** Columns of samples with their headers, yielded in pieces so that a long trace needs no string of its own length. */
export function* csvOfColumns(
  headers: string[],
  columns: ArrayLike<number>[],
  from = 0,
  to?: number,
): Generator<string> {
  yield csvRow(headers);
  const end = to ?? Math.max(0, ...columns.map((column) => column.length));
  let piece = '';
  for (let row = from; row < end; row += 1) {
    piece += csvRow(columns.map((column) => column[row] ?? null));
    if (piece.length > 1 << 16) {
      yield piece;
      piece = '';
    }
  }
  if (piece) yield piece;
}
