import 'server-only';
import { now } from '@/server/clock/service';
import { sql } from 'drizzle-orm';
import type { Tx } from '@/server/db/client';
import { logRecord } from '@/server/db/schema/housekeeping';

export type LogKind =
  | 'entry created'
  | 'version'
  | 'signature'
  | 'countersignature'
  | 'struck out'
  | 'question'
  | 'answer'
  | 'trace received'
  | 'contributor invited'
  | 'witness asked'
  | 'notebook founded'
  | 'notebook changed'
  | 'member added'
  | 'member changed'
  | 'member removed'
  | 'account created'
  | 'account changed'
  | 'rescue appointment';

/**
 * Adds one record to the log, in the transaction of the change that it tells of: if either fails, neither happens.
 * Numbers have no gaps, whichever process appends.
 */
export async function appendLog(
  tx: Tx,
  record: {
    kind: LogKind;
    actorId: string | null;
    notebookId?: string;
    entryId?: string;
    detail?: Record<string, unknown>;
  },
): Promise<void> {
  await tx.execute(sql`SELECT pg_advisory_xact_lock(7302)`);
  const [{ next }] = await tx.select({ next: sql<string>`coalesce(max(${logRecord.seq}), 0) + 1` }).from(logRecord);
  await tx.insert(logRecord).values({
    seq: Number(next),
    at: now(),
    kind: record.kind,
    actorId: record.actorId,
    notebookId: record.notebookId ?? null,
    entryId: record.entryId ?? null,
    detail: record.detail ?? {},
  });
}
