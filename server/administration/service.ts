import 'server-only';
import { eq, sql } from 'drizzle-orm';
import { listAccounts, listInvitations, type AccountLine, type InvitationLine } from '@/server/accounts/service';
import { getDb } from '@/server/db/client';
import { trace } from '@/server/db/schema/entries';
import { setting } from '@/server/db/schema/housekeeping';
import { env } from '@/server/env/env';
import { listOutbox, type OutboxLine } from '@/server/mail/service';

export type AdministrationDto = {
  accounts: AccountLine[];
  invitations: InvitationLine[];
  outbox: OutboxLine[];
  recovery: { at: string; sentence: string } | null;
  storage: { files: number; bytes: number; quota: number };
};

/** What the administrator looks after; nothing of what notebooks hold. */
export async function readAdministration(): Promise<AdministrationDto> {
  const db = await getDb();
  const [recovery] = await db.select({ value: setting.value }).from(setting).where(eq(setting.key, 'last-recovery'));
  const [stored] = await db
    .select({
      files: sql<number>`count(distinct ${trace.sha256})`,
      bytes: sql<number>`coalesce(sum(${trace.bytes}), 0)`,
    })
    .from(trace);
  return {
    accounts: await listAccounts(db),
    invitations: await listInvitations(db),
    outbox: await listOutbox(db),
    recovery: recovery ? (recovery.value as { at: string; sentence: string }) : null,
    storage: { files: Number(stored.files), bytes: Number(stored.bytes), quota: env().quotaBytes },
  };
}
