import { describe, expect, it } from 'vitest';
import { memoryProvider } from './provider';
import { withDerived } from './derived-provider';
import { nearestPoint, panRange, xExtent, yExtent, zoomRange } from './scale';
import { withInterval } from './span-editor';

const view = (x: number[], y: number[]) => ({
  kind: 'rows' as const,
  step: 1,
  from: 0,
  to: x.length,
  x: Float64Array.from(x),
  min: Float64Array.from(y),
  max: Float64Array.from(y),
});

describe('ranges of axes', () => {
  it('follow what is drawn, leave missing samples out, and never collapse', () => {
    const drawn = view([0, 1, 2, 3], [5, NaN, 5, 100]);
    expect(xExtent([drawn], false)).toEqual([0, 3]);
    expect(yExtent([drawn], [0, 2], false)).toEqual([4.46, 5.54]);
    expect(yExtent([view([0], [NaN])], [0, 1], false)).toBeNull();
  });

  it('take only positive values on a logarithmic axis', () => {
    expect(xExtent([view([-1, 0, 1, 10], [1, 1, 1, 1])], true)).toEqual([1, 10]);
    expect(yExtent([view([1, 2, 3], [-1, 1, 10])], [0, 9], true)).toEqual([1, 10]);
    expect(yExtent([view([1], [-1])], [0, 9], true)).toBeNull();
  });

  it('zoom about a centre and move by a share, also on a logarithmic axis', () => {
    expect(zoomRange([0, 10], 5, 0.5, false)).toEqual([2.5, 7.5]);
    const [from, to] = zoomRange([1, 100], 10, 0.5, true);
    expect(from).toBeCloseTo(Math.sqrt(10), 10);
    expect(to).toBeCloseTo(10 * Math.sqrt(10), 10);
    expect(panRange([0, 10], 0.5, false)).toEqual([5, 15]);
    expect(panRange([1, 100], 0.5, true)).toEqual([10, 1000]);
  });

  it('find the drawn point nearest to the cursor', () => {
    expect(nearestPoint(view([0, 1, 2], [0, 0, 0]), 1.4)).toBe(1);
    expect(nearestPoint(undefined, 1)).toBe(-1);
  });
});

describe('spans', () => {
  it('gather intervals under one name, ends in order, other spans untouched', () => {
    const first = withInterval([], 'on', 't', [5, 2]);
    const second = withInterval(first, 'off', 't', [6, 7]);
    expect(withInterval(second, 'on', 't', [0, 1])).toEqual([
      {
        name: 'on',
        axis: 't',
        intervals: [
          [0, 1],
          [2, 5],
        ],
      },
      { name: 'off', axis: 't', intervals: [[6, 7]] },
    ]);
  });
});

describe('derived columns', () => {
  it('plot against the columns of the file, and stand beside them in the table', async () => {
    const own = memoryProvider([{ symbol: 't', unit: 's', values: Float64Array.of(0, 1, 2) }]);
    const both = withDerived(own, [{ symbol: 'P', unit: '1', values: Float64Array.of(0.5, NaN, 0.7) }]);
    expect(both.columns.map(({ symbol }) => symbol)).toEqual(['t', 'P']);
    const drawn = await both.view('t', 'P', { from: null, to: null, pixels: 100 });
    expect(Array.from(drawn.x)).toEqual([0, 1, 2]);
    expect(Array.from(drawn.min)).toEqual([0.5, NaN, 0.7]);
    expect((await both.page(1, 5)).rows).toEqual([
      [1, null],
      [2, 0.7],
    ]);
  });
});
