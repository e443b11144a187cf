import type { Delimiter } from './parsed-trace';
import { TraceFormatError } from './parsed-trace';

/**
 * Splits one line into trimmed cells. Quotation marks hold a cell together and a doubled one stands for itself (RFC 4180);
 * a space stands for any run of spaces and tabs. One pass, so its time grows with the line's length and nothing else.
 *
 * @throws TraceFormatError where a quotation mark is never closed.
 */
export function splitCells(line: string, delimiter: Delimiter, lineNumber: number): string[] {
  const cells: string[] = [];
  const blank = (c: string) => c === ' ' || c === '\t';
  let i = 0;
  const n = line.length;
  if (delimiter === ' ') {
    for (;;) {
      while (i < n && blank(line[i] as string)) i += 1;
      if (i >= n) return cells;
      if (line[i] === '"') {
        const quoted = readQuoted(line, i, lineNumber);
        cells.push(quoted.text);
        i = quoted.next;
      } else {
        const from = i;
        while (i < n && !blank(line[i] as string)) i += 1;
        cells.push(line.slice(from, i));
      }
    }
  }
  for (;;) {
    while (i < n && line[i] !== delimiter && blank(line[i] as string)) i += 1;
    if (line[i] === '"') {
      const quoted = readQuoted(line, i, lineNumber);
      i = quoted.next;
      const rest = i;
      while (i < n && line[i] !== delimiter) i += 1;
      cells.push((quoted.text + line.slice(rest, i)).trim());
    } else {
      const end = line.indexOf(delimiter, i);
      const to = end < 0 ? n : end;
      cells.push(line.slice(i, to).trim());
      i = to;
    }
    if (i >= n) return cells;
    i += 1;
  }
}

function readQuoted(line: string, open: number, lineNumber: number): { text: string; next: number } {
  let text = '';
  let i = open + 1;
  for (;;) {
    const close = line.indexOf('"', i);
    if (close < 0) {
      throw new TraceFormatError(
        `Line ${lineNumber} opens a quotation mark that is never closed. Close it or remove it, and attach the file again.`,
        lineNumber,
      );
    }
    text += line.slice(i, close);
    if (line[close + 1] !== '"') return { text, next: close + 1 };
    text += '"';
    i = close + 2;
  }
}
