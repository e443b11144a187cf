import type { Direction } from './parsed-trace';

/** Running facts about one column's samples, fed block by block. */
export class ColumnStats {
  missing = 0;
  private low = Infinity;
  private high = -Infinity;
  private last = NaN;
  private rises = false;
  private falls = false;
  private seen = false;

  add(samples: Float64Array, rows: number): void {
    let { missing, low, high, last, rises, falls } = this;
    for (let i = 0; i < rows; i += 1) {
      const value = samples[i] as number;
      if (value !== value) {
        missing += 1;
        continue;
      }
      if (value < low) low = value;
      if (value > high) high = value;
      if (value > last) rises = true;
      else if (value < last) falls = true;
      last = value;
    }
    Object.assign(this, { missing, low, high, last, rises, falls, seen: this.seen || rows > missing });
  }

  get min(): number | null {
    return this.low <= this.high ? this.low : null;
  }

  get max(): number | null {
    return this.low <= this.high ? this.high : null;
  }

  get direction(): Direction {
    if (this.missing > 0 || !this.seen || (this.rises && this.falls)) return 'neither';
    return this.falls ? 'decreasing' : 'increasing';
  }
}
