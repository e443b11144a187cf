import 'server-only';
import { AppError } from '@/lib/errors/app-error';
import { getDb } from '@/server/db/client';
import { env } from '@/server/env/env';
import { readLocalMailbox, type LocalMail } from './service';

/** @throws AppError not_found wherever this is not a demonstration: links in mails belong to their recipients. */
export async function openMailbox(): Promise<LocalMail[]> {
  if (!env().demo || env().smtpUrl)
    throw new AppError('not_found', 'There is nothing here, or it is not for you to see.');
  return readLocalMailbox(await getDb());
}

/** null wherever the mailbox is closed. */
export async function openMailboxIfDemo(): Promise<LocalMail[] | null> {
  if (!env().demo || env().smtpUrl) return null;
  return readLocalMailbox(await getDb());
}
