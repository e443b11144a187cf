import type { TraceSettings } from '@/lib/document/attributes';
import { driveLabels, instrumentLabels, scanNames } from './scan-kinds';

/** What the author says of a trace, as terms and words. */
export function stated(settings: TraceSettings): [string, string | null][] {
  const of = (quantity: { text: string; source: string } | null, name: string) =>
    quantity ? `, ${name} ${quantity.text}${quantity.source ? ` (${quantity.source})` : ''}` : '';
  return [
    ...settings.columns.map(({ symbol, name, unit, gain, offset }): [string, string] => [
      symbol,
      `${name}, ${unit === null ? 'unit not stated' : unit === '1' ? 'a plain number' : unit}${of(gain, 'gain')}${of(offset, 'offset')}`,
    ]),
    ['Measured', settings.scanKind && scanNames[settings.scanKind]],
    ['Sign of the current', settings.sign],
    ['A positive current means', settings.signConvention],
    ['Sweep direction', settings.sweepDirection],
    ...Object.entries(driveLabels).map(([field, { label }]): [string, string | null] => [
      label,
      settings.drive[field as keyof typeof driveLabels],
    ]),
    ...Object.entries(instrumentLabels).map(([field, { label }]): [string, string | null] => [
      label,
      settings.instrument[field as keyof typeof instrumentLabels],
    ]),
  ];
}
