import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { buildPyramid } from './pyramid';
import { buildLevelCounts, decodeView, encodeView, memorySource, plotView, rowNumberSource } from './view';

const sample = fc.oneof(
  { weight: 9, arbitrary: fc.double({ noNaN: true, min: -1e3, max: 1e3 }) },
  { weight: 1, arbitrary: fc.constant(NaN) },
);

describe('min/max pyramid', () => {
  it('has the extremes of its rows at every level', () => {
    fc.assert(
      fc.property(fc.array(sample, { minLength: 1, maxLength: 5000, size: 'max' }), (values) => {
        const levels = buildPyramid(Float64Array.from(values));
        expect(levels.map(({ bucket, entries }) => ({ bucket, count: entries.length / 2 }))).toEqual(
          buildLevelCounts(values.length),
        );
        for (const { bucket, entries } of levels) {
          for (let i = 0; i < entries.length / 2; i += 1) {
            const part = values.slice(i * bucket, (i + 1) * bucket).filter((value) => !Number.isNaN(value));
            expect(entries[2 * i]).toBe(part.length ? Math.min(...part) : NaN);
            expect(entries[2 * i + 1]).toBe(part.length ? Math.max(...part) : NaN);
          }
        }
      }),
      { numRuns: 30 },
    );
  });
});

describe('views', () => {
  const n = 100_000;
  const t = Float64Array.from({ length: n }, (_, i) => i * 0.5);
  const y = Float64Array.from({ length: n }, (_, i) => Math.sin(i / 50));
  y[54_321] = 99;

  it('never lose an extreme and stay within a few entries per pixel', async () => {
    const view = await plotView(memorySource(t, 'increasing'), memorySource(y, 'neither'), {
      from: null,
      to: null,
      pixels: 300,
    });
    expect(view.kind).toBe('buckets');
    expect(view.x.length).toBeLessThanOrEqual(300);
    expect(view.x.length).toBeGreaterThan(100);
    expect(Math.max(...view.max)).toBe(99);
    expect(view.x.every((x, i) => i === 0 || x > (view.x[i - 1] as number))).toBe(true);
  });

  it('give every row once there are few enough, one beyond each end', async () => {
    const view = await plotView(memorySource(t, 'increasing'), memorySource(y, 'neither'), {
      from: 100,
      to: 110,
      pixels: 300,
    });
    expect(view.kind).toBe('rows');
    expect(view.x[0]).toBe(99.5);
    expect(view.x[view.x.length - 1]).toBe(110.5);
    expect(view.min[1]).toBe(y[200]);
  });

  it('turn a falling axis round', async () => {
    const falling = t.map((value) => -value);
    const view = await plotView(memorySource(falling, 'decreasing'), memorySource(y, 'neither'), {
      from: -110,
      to: -100,
      pixels: 300,
    });
    expect(view.x[0]).toBe(-110.5);
    expect(view.x[view.x.length - 1]).toBe(-99.5);
    expect(view.min[view.min.length - 2]).toBe(y[200]);
  });

  it('follow the rows where x goes to and fro, and say how many they leave out', async () => {
    const there = Float64Array.from({ length: n }, (_, i) => (i < n / 2 ? i : n - i));
    const whole = await plotView(memorySource(there, 'neither'), memorySource(y, 'neither'), {
      from: null,
      to: null,
      pixels: 200,
    });
    expect(whole.kind).toBe('sampled');
    expect(whole.step).toBe(250);
    const near = await plotView(memorySource(there, 'neither'), memorySource(y, 'neither'), {
      from: 10,
      to: 20,
      pixels: 200,
    });
    expect(near.kind).toBe('rows');
    const inside = Array.from(near.x).filter((x) => x >= 10 && x <= 20);
    expect(inside).toHaveLength(22);
    expect(near.x.some(Number.isNaN)).toBe(true);
  });

  it('survive the wire', async () => {
    const view = await plotView(rowNumberSource(n), memorySource(y, 'neither'), { from: null, to: null, pixels: 100 });
    expect(decodeView(encodeView(view).buffer)).toEqual(view);
    expect(() => decodeView(encodeView(view).buffer.slice(0, 100))).toThrow(RangeError);
  });
});
