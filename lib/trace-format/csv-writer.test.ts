import { describe, expect, it } from 'vitest';
import { csvCell, csvOfColumns, csvRow } from './csv-writer';

describe('CSV for spreadsheets', () => {
  it.each(['=1+1', '+cmd', '-2+3', '@SUM(A1)', '\t=1', '=HYPERLINK("http://evil.example")'])('guards %j', (text) => {
    expect(csvCell(text).replace(/^"/, '').startsWith("'")).toBe(true);
  });

  it.each(['-3', '-1.5e-12', '+2', '-.5'])('keeps the number %s', (text) => expect(csvCell(text)).toBe(text));

  it('quotes as RFC 4180 does and leaves not-finite numbers empty', () => {
    expect(csvRow(['a "b"', 'c,d', -1.5, null, NaN, Infinity])).toBe('"a ""b""","c,d",-1.5,,,\r\n');
  });

  it('writes columns row by row', () => {
    expect(
      [
        ...csvOfColumns(
          ['t / s', 'I / pA'],
          [
            [0, 1],
            [-2.5, NaN],
          ],
        ),
      ].join(''),
    ).toBe('t / s,I / pA\r\n0,-2.5\r\n1,\r\n');
  });
});
