const two = (n: number) => String(Math.trunc(Math.abs(n))).padStart(2, '0');

/** `2026-11-19T09:14:05+01:00`: the instant as a clock on the wall showed it, with its zone. */
export function clockTime(date: Date): string {
  const minutes = -date.getTimezoneOffset();
  const local = new Date(date.getTime() + minutes * 60_000).toISOString().slice(0, 19);
  return `${local}${minutes < 0 ? '-' : '+'}${two(minutes / 60)}:${two(minutes % 60)}`;
}
