import 'server-only';
import { and, asc, desc, eq, inArray, sql } from 'drizzle-orm';
import type { DbOrTx, Tx } from '@/server/db/client';
import {
  entry,
  entryContributor,
  entryDevice,
  entryDraft,
  entryVersion,
  trace,
  traceColumn,
} from '@/server/db/schema/entries';
import { cooldown, device } from '@/server/db/schema/laboratory';
import { notebook } from '@/server/db/schema/notebooks';

export type EntryRow = typeof entry.$inferSelect;
export type DraftRow = typeof entryDraft.$inferSelect;
export type VersionRow = typeof entryVersion.$inferSelect;
export type TraceRow = typeof trace.$inferSelect;

/** The entry, locked for the rest of the transaction: signing, saving and striking out take turns. */
export async function lockEntry(tx: Tx, entryId: string): Promise<EntryRow> {
  const [row] = await tx.select().from(entry).where(eq(entry.id, entryId)).for('update');
  return row;
}

export async function findDraft(db: DbOrTx, entryId: string): Promise<DraftRow> {
  const [row] = await db.select().from(entryDraft).where(eq(entryDraft.entryId, entryId));
  return row;
}

export async function findVersion(db: DbOrTx, entryId: string, seq: number): Promise<VersionRow | null> {
  const [row] = await db
    .select()
    .from(entryVersion)
    .where(and(eq(entryVersion.entryId, entryId), eq(entryVersion.seq, seq)));
  return row ?? null;
}

export async function listVersionRows(db: DbOrTx, entryId: string) {
  return db
    .select({
      id: entryVersion.id,
      entryId: entryVersion.entryId,
      seq: entryVersion.seq,
      digest: entryVersion.digest,
      previous: entryVersion.previous,
      title: entryVersion.title,
      reason: entryVersion.reason,
      createdAt: entryVersion.createdAt,
      createdBy: entryVersion.createdBy,
    })
    .from(entryVersion)
    .where(eq(entryVersion.entryId, entryId))
    .orderBy(desc(entryVersion.seq));
}

export async function notebookOf(db: DbOrTx, notebookId: string) {
  const [row] = await db.select().from(notebook).where(eq(notebook.id, notebookId));
  return row;
}

export async function devicesOf(db: DbOrTx, entryId: string): Promise<{ id: string; name: string }[]> {
  return db
    .select({ id: device.id, name: device.name })
    .from(entryDevice)
    .innerJoin(device, eq(device.id, entryDevice.deviceId))
    .where(eq(entryDevice.entryId, entryId))
    .orderBy(asc(device.name));
}

export async function cooldownOf(db: DbOrTx, cooldownId: string | null): Promise<{ id: string; name: string } | null> {
  if (!cooldownId) return null;
  const [row] = await db
    .select({ id: cooldown.id, name: cooldown.name })
    .from(cooldown)
    .where(eq(cooldown.id, cooldownId));
  return row ?? null;
}

/** Everybody invited to write in the entry; `wroteAt` tells who did. */
export async function contributorsOf(db: DbOrTx, entryId: string) {
  return db
    .select()
    .from(entryContributor)
    .where(eq(entryContributor.entryId, entryId))
    .orderBy(asc(entryContributor.since));
}

export async function filesOf(db: DbOrTx, entryId: string): Promise<TraceRow[]> {
  return db.select().from(trace).where(eq(trace.entryId, entryId)).orderBy(asc(trace.receivedAt), asc(trace.id));
}

export async function columnsOf(db: DbOrTx, traceIds: string[]) {
  if (traceIds.length === 0) return [];
  return db.select().from(traceColumn).where(inArray(traceColumn.traceId, traceIds)).orderBy(asc(traceColumn.position));
}

/** Devices and cooldown are of the entry's own notebook; anything else is left out by the WHERE. */
export async function ownedCooldown(db: DbOrTx, notebookId: string, cooldownId: string) {
  const [row] = await db
    .select({ id: cooldown.id })
    .from(cooldown)
    .where(and(eq(cooldown.id, cooldownId), eq(cooldown.notebookId, notebookId)));
  return row ?? null;
}

export async function ownedDevices(db: DbOrTx, notebookId: string, ids: string[]): Promise<string[]> {
  if (ids.length === 0) return [];
  const rows = await db
    .select({ id: device.id })
    .from(device)
    .where(and(inArray(device.id, ids), eq(device.notebookId, notebookId)));
  return rows.map((row) => row.id);
}

export async function takeLeaf(tx: Tx, notebookId: string): Promise<number> {
  const [row] = await tx
    .update(notebook)
    .set({ nextLeaf: sql`${notebook.nextLeaf} + 1` })
    .where(eq(notebook.id, notebookId))
    .returning({ taken: sql<number>`${notebook.nextLeaf} - 1` });
  return Number(row.taken);
}
