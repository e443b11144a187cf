import { Refusal } from '@/lib/errors/refusal';
import { findUnit } from '@/lib/units/table';
import type { TraceSource } from './contract';

/** Says what a name that nothing defines might have been: a trace, a span, a unit, another spelling. */
export function unknownName(name: string, traces: readonly TraceSource[], symbols: readonly string[]): Refusal {
  const trace = traces.find(({ handle }) => handle === name);
  if (trace) {
    const column = trace.settings.columns[1]?.symbol ?? trace.settings.columns[0]?.symbol ?? 'I';
    return new Refusal('unknown-name', `\`${name}\` is a trace: name one of its columns, as in ${name}.${column}.`);
  }
  const spanned = traces.find(({ spans }) => spans.some((span) => span.name === name));
  if (spanned) {
    return new Refusal(
      'unknown-name',
      `\`${name}\` is a span of ${spanned.handle}: it stands in mean, sd, median, count, slope and integral, as in mean(${spanned.handle}.I, ${name}).`,
    );
  }
  const near = symbols.filter((symbol) => symbol.toLowerCase() === name.toLowerCase());
  if (near.length > 0)
    return new Refusal('unknown-name', `\`${name}\` is not known in this entry. Did you mean ${near.join(', ')}?`);
  const asUnit = findUnit(name)
    ? ' As a unit it stands right after a number, as in 5 V/A, without spaces.'
    : ' Give it a value in a line of its own.';
  return new Refusal('unknown-name', `\`${name}\` is not known in this entry.${asUnit}`);
}
