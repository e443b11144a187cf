/** `P_esc = 0.9191(47)` where a result is known, else the line as typed. */
export function valueLine(source: unknown, shown: unknown): string {
  const line = typeof source === 'string' ? source : '';
  if (typeof shown !== 'string' || shown === '') return line;
  const cut = line.indexOf('=');
  const symbol = cut > 0 ? line.slice(0, cut).trim() : '';
  return symbol ? `${symbol} = ${shown}` : shown;
}
