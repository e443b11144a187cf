import 'server-only';
import { and, desc, eq, inArray, sql } from 'drizzle-orm';
import { type EntryDto, type EntryState, type PersonDto, type TraceDto } from '@/lib/schemas/entry';
import { allows } from '@/server/access/rights';
import type { ScopeOf } from '@/server/access/scope';
import { getDb, type DbOrTx } from '@/server/db/client';
import { entry, entryDevice } from '@/server/db/schema/entries';
import { cooldown, device } from '@/server/db/schema/laboratory';
import { notebook, notebookMember } from '@/server/db/schema/notebooks';
import { peopleById } from '@/server/people/service';
import { questionsOf } from '@/server/questions/service';
import { signaturesOf } from '@/server/signing/service';
import { countersignObstacle, tracesSeen } from '@/server/signing/witness-service';
import * as queries from './queries';

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
