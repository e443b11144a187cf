import 'server-only';
import { AppError } from '@/lib/errors/app-error';
import type { EntryState } from '@/lib/schemas/entry';

/** Inside a transaction, with the entry's row locked: what was allowed at the door may have been overtaken. */
export function refuseFrozen(state: EntryState): void {
  if (state === 'draft') return;
  throw new AppError(
    'frozen',
    state === 'struck out'
      ? 'This entry is struck out: it stays readable and is not changed any more. What you typed is kept in this browser.'
      : 'This entry is signed and cannot be edited. What you typed is kept in this browser; a signed entry changes only by an amendment.',
  );
}
