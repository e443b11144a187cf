import 'server-only';
import { now } from '@/server/clock/service';
import { randomUUID } from 'node:crypto';
import { and, desc, eq, inArray, sql } from 'drizzle-orm';
import { z } from 'zod';
import { clockTimeSchema } from '@/lib/document/attributes';
import { documentText } from '@/lib/document/text';
import type { DocumentJson } from '@/lib/document/json';
import { AppError } from '@/lib/errors/app-error';
import {
  titleSchema,
  workDateSchema,
  type EntryDto,
  type EntryState,
  type PersonDto,
  type TraceDto,
} from '@/lib/schemas/entry';
import { allows } from '@/server/access/rights';
import type { ScopeOf } from '@/server/access/scope';
import { getDb, type DbOrTx, type Tx } from '@/server/db/client';
import { entry, entryContributor, entryDevice, entryDraft, entryVersion } from '@/server/db/schema/entries';
import { cooldown, device } from '@/server/db/schema/laboratory';
import { notebook, notebookMember } from '@/server/db/schema/notebooks';
import { layoutDocument } from '@/server/layouts/service';
import { appendLog } from '@/server/log/service';
import { peopleById } from '@/server/people/service';
import { questionsOf } from '@/server/questions/service';
import { countersignObstacle, signaturesOf, tracesSeen } from '@/server/signing/service';
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

/** Everything the entry page shows to this reader. */
export async function readEntry(scope: ScopeOf<'entry.read'>): Promise<EntryDto> {
  const db = await getDb();
  const { entry: row, person, notebook: book, standing } = scope;
  const contributors = await queries.contributorsOf(db, row.id);
  const head = row.headSeq > 0 ? await queries.findVersion(db, row.id, row.headSeq) : null;
  const people = await peopleById(db, [
    row.authorId,
    ...contributors.map((c) => c.userId),
    ...(head ? [head.createdBy] : []),
  ]);
  const countersigns = allows('entry.countersign', standing);
  return {
    id: row.id,
    notebook: { code: book.code, title: book.title },
    leaf: row.leaf,
    title: row.title,
    workDate: row.workDate,
    state: row.state,
    author: people.get(row.authorId)!,
    contributors: contributors.map((c) => people.get(c.userId)!),
    cooldown: await queries.cooldownOf(db, row.cooldownId),
    devices: await queries.devicesOf(db, row.id),
    head: head
      ? {
          id: head.id,
          seq: head.seq,
          digest: head.digest,
          createdAt: head.createdAt.toISOString(),
          createdBy: people.get(head.createdBy)!,
        }
      : null,
    struckReason: row.struckReason,
    questions: await questionsOf(db, row.id, person.id),
    signatures: await signaturesOf(db, row.id),
    traces: await tracesOfEntry(db, row.id),
    may: {
      write: allows('entry.write', standing),
      ask: allows('entry.ask', standing),
      answer: allows('question.answer', standing),
      sign: allows('entry.sign', standing),
      countersign: countersigns,
      strikeOut: allows('entry.strike', standing),
      invite: allows('entry.invite', standing),
    },
    countersignObstacle: countersigns ? await countersignObstacle(db, row, person.id) : null,
    seen: countersigns ? await tracesSeen(db, row, person.id) : { traces: 0, of: 0 },
    late: lateness(row, book.lateAfterDays),
  };
}

function lateness(row: queries.EntryRow, limit: number): EntryDto['late'] {
  if (row.state !== 'draft') return null;
  const days = Math.floor((Date.now() - Date.parse(row.workDate)) / 86_400_000);
  return days > limit ? { days, limit } : null;
}

/** Received files of an entry that are traces, with their columns. */
export async function tracesOfEntry(db: DbOrTx, entryId: string): Promise<TraceDto[]> {
  const files = (await queries.filesOf(db, entryId)).filter((file) => file.kind === 'trace');
  const columns = await queries.columnsOf(
    db,
    files.map((file) => file.id),
  );
  const people = await peopleById(
    db,
    files.map((file) => file.uploadedBy),
  );
  return files.map((file) => serializeTrace(file, columns, people));
}

export function serializeTrace(
  file: queries.TraceRow,
  columns: Awaited<ReturnType<typeof queries.columnsOf>>,
  people: Map<string, PersonDto>,
): TraceDto {
  return {
    id: file.id,
    entryId: file.entryId,
    fileName: file.fileName,
    mediaType: file.mediaType,
    bytes: file.bytes,
    sha256: file.sha256,
    state: file.state,
    problem: file.problem,
    rows: file.rows,
    columns: columns
      .filter((column) => column.traceId === file.id)
      .map(({ name, symbol, unit, missing, minimum, maximum }) => ({
        name,
        symbol,
        unit,
        missing,
        min: minimum === null ? null : Number(minimum),
        max: maximum === null ? null : Number(maximum),
      })),
    comments: file.comments,
    uploadedBy: people.get(file.uploadedBy)!,
    receivedAt: file.receivedAt.toISOString(),
  };
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

export type EntryLine = {
  id: string;
  notebook: string;
  leaf: number;
  title: string;
  workDate: string;
  state: EntryState;
  author: PersonDto;
  cooldown: string | null;
  devices: string[];
  versions: number;
  changedAt: string;
  openQuestions: number;
};

/** Entries that a person may read, newest work first; `within` narrows them to one notebook, cooldown or device. */
export async function listEntries(
  readerId: string,
  within: { notebookId: string } | { cooldownId: string } | { deviceId: string } | { everywhere: true },
): Promise<EntryLine[]> {
  const db = await getDb();
  const place =
    'notebookId' in within
      ? eq(entry.notebookId, within.notebookId)
      : 'cooldownId' in within
        ? eq(entry.cooldownId, within.cooldownId)
        : 'deviceId' in within
          ? sql`exists (select 1 from ${entryDevice} where ${entryDevice.entryId} = ${entry.id} and ${entryDevice.deviceId} = ${within.deviceId})`
          : sql`true`;
  const rows = await db
    .select({
      row: entry,
      code: notebook.code,
      cooldown: cooldown.name,
      openQuestions: sql<number>`(select count(*) from question where question.entry_id = ${entry.id} and question.state = 'open')`,
    })
    .from(entry)
    .innerJoin(notebook, eq(notebook.id, entry.notebookId))
    .innerJoin(
      notebookMember,
      and(eq(notebookMember.notebookId, entry.notebookId), eq(notebookMember.userId, readerId)),
    )
    .leftJoin(cooldown, eq(cooldown.id, entry.cooldownId))
    .where(place)
    .orderBy(desc(entry.workDate), desc(entry.leaf))
    .limit(10_000);
  const ids = rows.map(({ row }) => row.id);
  const devices =
    ids.length === 0
      ? []
      : await db
          .select({ entryId: entryDevice.entryId, name: device.name })
          .from(entryDevice)
          .innerJoin(device, eq(device.id, entryDevice.deviceId))
          .where(inArray(entryDevice.entryId, ids));
  const devicesByEntry = groupByEntry(devices);
  const people = await peopleById(
    db,
    rows.map(({ row }) => row.authorId),
  );
  return rows.map(({ row, code, cooldown: cooldownName, openQuestions }) => ({
    id: row.id,
    notebook: code,
    leaf: row.leaf,
    title: row.title,
    workDate: row.workDate,
    state: row.state,
    author: people.get(row.authorId)!,
    cooldown: cooldownName,
    devices: (devicesByEntry.get(row.id) ?? []).map((d) => d.name),
    versions: row.headSeq,
    changedAt: row.changedAt.toISOString(),
    openQuestions: Number(openQuestions),
  }));
}

function groupByEntry(devices: { entryId: string; name: string }[]) {
  const groups = new Map<string, { entryId: string; name: string }[]>();
  for (const item of devices) groups.set(item.entryId, [...(groups.get(item.entryId) ?? []), item]);
  return groups;
}

/** Leads, authors and witnesses of the notebook who could countersign this entry. */
export async function possibleWitnesses(scope: ScopeOf<'entry.sign'>): Promise<PersonDto[]> {
  const db = await getDb();
  const members = await db
    .select({ id: notebookMember.userId })
    .from(notebookMember)
    .where(
      and(
        eq(notebookMember.notebookId, scope.entry.notebookId),
        inArray(notebookMember.role, ['lead', 'author', 'witness']),
      ),
    );
  const barred = new Set([
    scope.entry.authorId,
    ...(await queries.contributorsOf(db, scope.entry.id)).map((c) => c.userId),
  ]);
  const people = await peopleById(
    db,
    members.map((m) => m.id).filter((id) => !barred.has(id)),
  );
  return [...people.values()].sort((a, b) => a.name.localeCompare(b.name));
}

/** Whether a digest is a version of an entry that the reader may see, for pasting on the verify page. */
export async function findByDigest(
  readerId: string,
  digest: string,
): Promise<{ entryId: string; seq: number; title: string } | null> {
  const db = await getDb();
  const [row] = await db
    .select({ entryId: entryVersion.entryId, seq: entryVersion.seq, title: entryVersion.title })
    .from(entryVersion)
    .innerJoin(entry, eq(entry.id, entryVersion.entryId))
    .innerJoin(
      notebookMember,
      and(eq(notebookMember.notebookId, entry.notebookId), eq(notebookMember.userId, readerId)),
    )
    .where(eq(entryVersion.digest, digest));
  return row ?? null;
}

export type EntryChoices = Record<'cooldowns' | 'devices' | 'colleagues', { id: string; name: string }[]>;

/** What the author can tie a draft to, and whom they can invite to write in it. */
export async function entryChoices(scope: ScopeOf<'entry.read'>): Promise<EntryChoices> {
  const db = await getDb();
  const { notebookId } = scope.entry;
  const writers = await db
    .select({ id: notebookMember.userId })
    .from(notebookMember)
    .where(and(eq(notebookMember.notebookId, notebookId), inArray(notebookMember.role, ['lead', 'author'])));
  return {
    cooldowns: await db
      .select({ id: cooldown.id, name: cooldown.name })
      .from(cooldown)
      .where(eq(cooldown.notebookId, notebookId)),
    devices: await db
      .select({ id: device.id, name: device.name })
      .from(device)
      .where(eq(device.notebookId, notebookId)),
    colleagues: [
      ...(
        await peopleById(
          db,
          writers.map((w) => w.id),
        )
      ).values(),
    ],
  };
}
