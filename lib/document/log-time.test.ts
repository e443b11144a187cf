import { describe, expect, it } from 'vitest';
import { clockTimeSchema } from './attributes';
import { clockTime } from './clock-time';

/** Zone as getTimezoneOffset gives it: minutes to add to local time to reach UTC (ECMA-262 21.4.4.11). */
class Zoned extends Date {
  constructor(
    iso: string,
    private readonly offset: number,
  ) {
    super(iso);
  }
  override getTimezoneOffset() {
    return this.offset;
  }
}

describe('clockTime', () => {
  it.each([
    ['2026-11-19T08:14:05Z', -60, '2026-11-19T09:14:05+01:00'],
    ['2026-11-19T08:14:05Z', 210, '2026-11-19T04:44:05-03:30'],
    ['2026-12-31T23:59:59Z', -345, '2027-01-01T05:44:59+05:45'],
    ['2026-11-19T08:14:05Z', 0, '2026-11-19T08:14:05+00:00'],
  ])('%s at offset %d is %s', (iso, offset, expected) => {
    const text = clockTime(new Zoned(iso, offset));
    expect(text).toBe(expected);
    expect(clockTimeSchema.safeParse(text).success).toBe(true);
    expect(Date.parse(text)).toBe(Date.parse(iso));
  });
});
