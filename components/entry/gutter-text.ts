import type { BlockStamps } from '@/lib/schemas/entry';

export type StampState = {
  stamps: BlockStamps;
  /** Written here and not stamped by the server yet. */
  written: Record<string, string>;
  /** Initials by person id, and those of who writes now. */
  initials: Record<string, string>;
  own: string;
  workDate: string;
};

/** `09:14`, with the date before it where it is not the day of the work. Wall-clock time of whoever wrote it. */
function timeIn(at: string, workDate: string): string {
  const day = at.slice(0, 10);
  return `${day === workDate || workDate === '' ? '' : `${day.slice(5)} `}${at.slice(11, 16)}`;
}

/** What the gutter says of a block: first written, and in a second line last changed where minute or hand differ. */
export function gutterText(id: string, state: StampState): string {
  const stamp = state.stamps[id];
  const fresh = state.written[id];
  const line = (at: string, who: string) => `${timeIn(at, state.workDate)} ${who}`.trim();
  const first = stamp
    ? line(stamp.first.at, state.initials[stamp.first.by] ?? '')
    : fresh
      ? line(fresh, state.own)
      : '';
  const last = fresh ? line(fresh, state.own) : stamp ? line(stamp.last.at, state.initials[stamp.last.by] ?? '') : '';
  return last === '' || last === first ? first : `${first}\n${last}`;
}
