import 'server-only';
import { and, asc, eq, sql } from 'drizzle-orm';
import type { DbOrTx, Tx } from '@/server/db/client';
import { trace, traceColumn } from '@/server/db/schema/entries';

export type TraceRow = typeof trace.$inferSelect;
export type ColumnRow = typeof traceColumn.$inferSelect;

export async function findTrace(db: DbOrTx, id: string): Promise<TraceRow | null> {
  const [row] = await db.select().from(trace).where(eq(trace.id, id));
  return row ?? null;
}

export async function findUpload(
  db: DbOrTx,
  by: { personId: string; entryId: string; uploadId: string },
): Promise<TraceRow | null> {
  const [row] = await db
    .select()
    .from(trace)
    .where(and(eq(trace.uploadedBy, by.personId), eq(trace.entryId, by.entryId), eq(trace.uploadId, by.uploadId)));
  return row ?? null;
}

export async function columnsOf(db: DbOrTx, traceId: string): Promise<ColumnRow[]> {
  return db.select().from(traceColumn).where(eq(traceColumn.traceId, traceId)).orderBy(asc(traceColumn.position));
}

/** @returns false where this upload has been recorded already. */
export async function insertTrace(tx: Tx, row: typeof trace.$inferInsert): Promise<boolean> {
  const inserted = await tx.insert(trace).values(row).onConflictDoNothing().returning({ id: trace.id });
  return inserted.length > 0;
}

/** Records what parsing gave; a trace that has been settled before stays as it is. */
export async function settleTrace(
  tx: Tx,
  id: string,
  facts: { state: 'parsed' | 'unreadable'; problem: string | null; rows: number; comments: string[] },
  columns: Omit<ColumnRow, 'traceId'>[],
): Promise<void> {
  const settled = await tx
    .update(trace)
    .set(facts)
    .where(and(eq(trace.id, id), eq(trace.state, 'received')))
    .returning({ id: trace.id });
  if (settled.length === 0 || columns.length === 0) return;
  await tx.insert(traceColumn).values(columns.map((column) => ({ ...column, traceId: id })));
}

export async function unsettled(db: DbOrTx): Promise<TraceRow[]> {
  return db.select().from(trace).where(eq(trace.state, 'received')).orderBy(asc(trace.receivedAt)).limit(1000);
}

export async function isReferred(db: DbOrTx, sha256: string): Promise<boolean> {
  const rows = await db.select({ id: trace.id }).from(trace).where(eq(trace.sha256, sha256)).limit(1);
  return rows.length > 0;
}

/** Bytes of all received files; a file attached twice lies there once. */
export async function storedBytes(db: DbOrTx): Promise<number> {
  const distinct = db.selectDistinct({ sha256: trace.sha256, bytes: trace.bytes }).from(trace).as('stored');
  const [row] = await db.select({ total: sql<string>`coalesce(sum(${distinct.bytes}), 0)` }).from(distinct);
  return Number(row?.total ?? 0);
}
