import 'server-only';

export const meanings = {
  author: 'I carried out this work and this entry records it.',
  witness: 'I have read and understood this entry; I took no part in the work.',
} as const;

/** Whole days between the date of work and now, by calendar date in the signer's zone. */
export function daysSince(workDate: string, now: Date, zone: string): number {
  const today = new Intl.DateTimeFormat('en-CA', { timeZone: zone, dateStyle: 'short' }).format(now);
  return Math.round((Date.parse(today) - Date.parse(workDate)) / 86_400_000);
}
