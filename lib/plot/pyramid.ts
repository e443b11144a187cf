/**
 * Min/max pyramid of one column: level 0 holds the least and greatest sample of every 16 rows, each further level of four
 * entries of the one below. A view of any width then costs time and bytes proportional to its pixels, and shows every
 * extreme. Missing samples (NaN) count for nothing; an entry without any sample is NaN, NaN.
 */

export const baseRows = 16;
export const factor = 4;
/** Levels stop when one has no more entries than this. */
const topEntries = 64;

/** `entries` holds min and max in turn; `bucket` is how many rows one entry stands for. */
export type PyramidLevel = { bucket: number; entries: Float64Array };

/** Builds the pyramid from samples that come block by block. */
export class PyramidBuilder {
  private base = new Float64Array(1024);
  private used = 0;
  private low = Infinity;
  private high = -Infinity;
  private pending = 0;

  add(samples: Float64Array, rows: number): void {
    let { low, high, pending } = this;
    for (let i = 0; i < rows; i += 1) {
      const value = samples[i] as number;
      if (value < low) low = value;
      if (value > high) high = value;
      pending += 1;
      if (pending === baseRows) {
        this.append(low, high);
        low = Infinity;
        high = -Infinity;
        pending = 0;
      }
    }
    Object.assign(this, { low, high, pending });
  }

  finish(): PyramidLevel[] {
    if (this.pending > 0) this.append(this.low, this.high);
    this.pending = 0;
    const levels: PyramidLevel[] = [{ bucket: baseRows, entries: this.base.slice(0, this.used) }];
    for (;;) {
      const below = levels[levels.length - 1] as PyramidLevel;
      const count = below.entries.length / 2;
      if (count <= topEntries) return levels;
      levels.push({ bucket: below.bucket * factor, entries: groupEntries(below.entries, factor) });
    }
  }

  private append(low: number, high: number): void {
    if (this.used + 2 > this.base.length) {
      const grown = new Float64Array(this.base.length * 2);
      grown.set(this.base);
      this.base = grown;
    }
    this.base[this.used] = low <= high ? low : NaN;
    this.base[this.used + 1] = low <= high ? high : NaN;
    this.used += 2;
  }
}

/** Joins every `size` neighbouring entries into one; the last may stand for fewer. */
export function groupEntries(entries: Float64Array, size: number): Float64Array {
  const count = entries.length / 2;
  const groups = Math.ceil(count / size);
  const out = new Float64Array(groups * 2);
  for (let g = 0; g < groups; g += 1) {
    let low = Infinity;
    let high = -Infinity;
    const end = Math.min(count, (g + 1) * size);
    for (let i = g * size; i < end; i += 1) {
      // Comparisons with NaN are false, so an entry without samples changes nothing.
      if ((entries[2 * i] as number) < low) low = entries[2 * i] as number;
      if ((entries[2 * i + 1] as number) > high) high = entries[2 * i + 1] as number;
    }
    out[2 * g] = low <= high ? low : NaN;
    out[2 * g + 1] = low <= high ? high : NaN;
  }
  return out;
}

export function buildPyramid(samples: Float64Array): PyramidLevel[] {
  const builder = new PyramidBuilder();
  builder.add(samples, samples.length);
  return builder.finish();
}
