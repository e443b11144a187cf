import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { rowsIdentity, type RowRanges } from './input';

const ranges = fc.array(fc.integer({ min: 1, max: 5 }), { minLength: 2, maxLength: 60 }).map((steps): RowRanges => {
  let at = 0;
  const rows: [number, number][] = [];
  for (let i = 0; i + 1 < steps.length; i += 2) {
    const start = at + steps[i];
    at = start + steps[i + 1];
    rows.push([start, at]);
  }
  return rows;
});

describe('identity of rows', () => {
  it('is equal for equal rows and differs for others, and stays short', () => {
    fc.assert(
      fc.property(ranges, ranges, (a, b) => {
        const copy = a.map(([start, end]): [number, number] => [start, end]);
        expect(rowsIdentity(copy)).toBe(rowsIdentity(a));
        expect(rowsIdentity(a) === rowsIdentity(b)).toBe(JSON.stringify(a) === JSON.stringify(b));
        expect(rowsIdentity(a).length).toBeLessThan(140);
      }),
      { numRuns: 500 },
    );
  });

  it('sees one range moved by one row among thousands', () => {
    const many = Array.from({ length: 5000 }, (_, i): [number, number] => [4 * i, 4 * i + 2]);
    const identities = new Set([rowsIdentity(many)]);
    for (let i = 1; i < 4999; i++) {
      identities.add(
        rowsIdentity(many.map((range, j): [number, number] => (j === i ? [range[0] + 1, range[1] + 1] : range))),
      );
      if (i > 200) break;
    }
    expect(identities.size).toBe(202);
  });
});
