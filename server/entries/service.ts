import 'server-only';
import { now } from '@/server/clock/service';
import { randomUUID } from 'node:crypto';
import { and, eq } from 'drizzle-orm';
import { z } from 'zod';
import { clockTimeSchema } from '@/lib/document/attributes';
import { documentText } from '@/lib/document/text';
import type { DocumentJson } from '@/lib/document/json';
import { AppError } from '@/lib/errors/app-error';
import { titleSchema, workDateSchema } from '@/lib/schemas/entry';
import type { ScopeOf } from '@/server/access/scope';
import { getDb, type DbOrTx, type Tx } from '@/server/db/client';
import { entry, entryContributor, entryDevice, entryDraft } from '@/server/db/schema/entries';
import { notebookMember } from '@/server/db/schema/notebooks';
import { layoutDocument } from '@/server/layouts/service';
import { appendLog } from '@/server/log/service';
import * as queries from './queries';
import { nextStamps } from './stamps';
import { refuseFrozen } from './states';

export const newEntrySchema = z
  .object({
    title: titleSchema,
    workDate: workDateSchema,
    cooldownId: z.uuid().nullable(),
    deviceIds: z.array(z.uuid()).max(20),
    /** `cooldown-day`, `empty`, or the id of a saved layout of this notebook. */
    layout: z.string().max(60),
    requestKey: z.uuid(),
    /** The writer's clock, with its zone: the time that the layout's blocks carry. The server's own where left out. */
    writtenAt: z.optional(clockTimeSchema),
  })
  .strict();

/** Creates an entry on the notebook's next leaf. A repeated `requestKey` gives the entry that the first one made. */
export async function createEntry(
  scope: ScopeOf<'entry.create'>,
  input: z.infer<typeof newEntrySchema>,
): Promise<{ id: string; leaf: number }> {
  const { notebook: book, person } = scope;
  const db = await getDb();
  return db.transaction(async (tx) => {
    const [known] = await tx
      .select({ id: entry.id, leaf: entry.leaf, authorId: entry.authorId })
      .from(entry)
      .where(eq(entry.requestKey, input.requestKey));
    if (known) {
      if (known.authorId !== person.id) throw new AppError('conflict', 'This request was made by somebody else.');
      return { id: known.id, leaf: known.leaf };
    }
    const doc = await layoutDocument(tx, book.id, input.layout);
    return insertEntry(tx, {
      notebookId: book.id,
      authorId: person.id,
      title: input.title,
      workDate: input.workDate,
      cooldownId: input.cooldownId,
      deviceIds: input.deviceIds,
      doc,
      requestKey: input.requestKey,
      at: now(),
      writtenAt: input.writtenAt,
    });
  });
}

export type NewEntry = {
  notebookId: string;
  authorId: string;
  title: string;
  workDate: string;
  cooldownId: string | null;
  deviceIds: string[];
  doc: DocumentJson;
  requestKey: string | null;
  at: Date;
  writtenAt?: string;
};

/** Takes the next leaf and stores entry, draft and log record. */
export async function insertEntry(tx: Tx, input: NewEntry): Promise<{ id: string; leaf: number }> {
  await checkPlaces(tx, input.notebookId, input.cooldownId, input.deviceIds);
  const id = randomUUID();
  const leaf = await queries.takeLeaf(tx, input.notebookId);
  await tx.insert(entry).values({
    id,
    notebookId: input.notebookId,
    leaf,
    title: input.title,
    workDate: input.workDate,
    authorId: input.authorId,
    cooldownId: input.cooldownId,
    requestKey: input.requestKey,
    words: `${input.title} ${documentText(input.doc)}`,
    createdAt: input.at,
    changedAt: input.at,
  });
  if (input.deviceIds.length > 0)
    await tx.insert(entryDevice).values(input.deviceIds.map((deviceId) => ({ entryId: id, deviceId })));
  const { writtenAt } = input;
  const blocks = input.doc.content ?? [];
  const stamps = nextStamps({}, blocks, {
    written: writtenAt ? Object.fromEntries(blocks.map((block) => [String(block.attrs?.id), writtenAt])) : {},
    clockOffsetMs: 0,
    by: input.authorId,
    received: input.at,
  });
  await tx.insert(entryDraft).values({
    entryId: id,
    revision: 1,
    title: input.title,
    doc: input.doc,
    stamps,
    savedAt: input.at,
    savedBy: input.authorId,
  });
  await appendLog(tx, {
    kind: 'entry created',
    actorId: input.authorId,
    notebookId: input.notebookId,
    entryId: id,
    detail: { leaf },
  });
  return { id, leaf };
}

async function checkPlaces(
  tx: DbOrTx,
  notebookId: string,
  cooldownId: string | null,
  deviceIds: string[],
): Promise<void> {
  if (cooldownId && !(await queries.ownedCooldown(tx, notebookId, cooldownId))) {
    throw new AppError('invalid', 'This cooldown is not one of this notebook.', { field: 'cooldownId' });
  }
  if ((await queries.ownedDevices(tx, notebookId, deviceIds)).length !== new Set(deviceIds).size) {
    throw new AppError('invalid', 'A device of the list is not one of this notebook.', { field: 'deviceIds' });
  }
}

export const entryFactsSchema = z
  .object({ workDate: workDateSchema, cooldownId: z.uuid().nullable(), deviceIds: z.array(z.uuid()).max(20) })
  .strict();

/** Date of work, cooldown and devices of a draft. */
export async function changeFacts(
  scope: ScopeOf<'entry.write'>,
  facts: z.infer<typeof entryFactsSchema>,
): Promise<void> {
  const db = await getDb();
  await db.transaction(async (tx) => {
    const row = await queries.lockEntry(tx, scope.entry.id);
    refuseFrozen(row.state);
    await checkPlaces(tx, row.notebookId, facts.cooldownId, facts.deviceIds);
    await tx
      .update(entry)
      .set({ workDate: facts.workDate, cooldownId: facts.cooldownId, changedAt: now() })
      .where(eq(entry.id, row.id));
    await tx.delete(entryDevice).where(eq(entryDevice.entryId, row.id));
    if (facts.deviceIds.length > 0)
      await tx.insert(entryDevice).values(facts.deviceIds.map((deviceId) => ({ entryId: row.id, deviceId })));
    // The next version binds other facts, so it must be cut even where the text has not changed.
    await tx.update(entryDraft).set({ cutRevision: 0 }).where(eq(entryDraft.entryId, row.id));
  });
}

export const strikeSchema = z
  .object({ reason: z.string().trim().min(3, 'Give the reason, as on paper.').max(2000) })
  .strict();

/** Strikes out a draft: its leaf number stays used and its text readable. */
export async function strikeOut(scope: ScopeOf<'entry.strike'>, reason: string): Promise<void> {
  const db = await getDb();
  await db.transaction(async (tx) => {
    const row = await queries.lockEntry(tx, scope.entry.id);
    refuseFrozen(row.state);
    const at = now();
    await tx
      .update(entry)
      .set({ state: 'struck out', struckReason: reason, struckAt: at, changedAt: at })
      .where(eq(entry.id, row.id));
    await appendLog(tx, {
      kind: 'struck out',
      actorId: scope.person.id,
      notebookId: row.notebookId,
      entryId: row.id,
      detail: { reason },
    });
  });
}

export const contributorSchema = z.object({ userId: z.string().max(64) }).strict();

/** Lets a colleague with the author's role write in this draft. Whoever was invited can no longer be its witness. */
export async function inviteContributor(scope: ScopeOf<'entry.invite'>, userId: string): Promise<void> {
  const db = await getDb();
  await db.transaction(async (tx) => {
    const [member] = await tx
      .select({ role: notebookMember.role })
      .from(notebookMember)
      .where(and(eq(notebookMember.notebookId, scope.entry.notebookId), eq(notebookMember.userId, userId)));
    if (!member || (member.role !== 'lead' && member.role !== 'author') || userId === scope.person.id) {
      throw new AppError('invalid', 'Only a lead or author of this notebook can write in this entry.', {
        field: 'userId',
      });
    }
    await tx
      .insert(entryContributor)
      .values({ entryId: scope.entry.id, userId, invitedBy: scope.person.id })
      .onConflictDoUpdate({
        target: [entryContributor.entryId, entryContributor.userId],
        set: { endedAt: null },
      });
    await appendLog(tx, {
      kind: 'contributor invited',
      actorId: scope.person.id,
      notebookId: scope.entry.notebookId,
      entryId: scope.entry.id,
      detail: { person: userId },
    });
  });
}
