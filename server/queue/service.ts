import 'server-only';
import { and, asc, eq, inArray, isNull, ne, sql } from 'drizzle-orm';
import type { PersonDto } from '@/lib/schemas/entry';
import { getDb } from '@/server/db/client';
import { entry, entryContributor } from '@/server/db/schema/entries';
import { cooldown } from '@/server/db/schema/laboratory';
import { notebook, notebookMember } from '@/server/db/schema/notebooks';
import { question, signature, witnessRequest } from '@/server/db/schema/signing';
import { peopleById } from '@/server/people/service';

export type QueueLine = {
  id: string;
  notebook: string;
  leaf: number;
  title: string;
  workDate: string;
  author: PersonDto;
  signedAt: string | null;
  asked: boolean;
  openQuestions: number;
};

/** Signed entries that this person may countersign: first those for which they were asked. */
export async function readQueue(personId: string): Promise<QueueLine[]> {
  const db = await getDb();
  const rows = await db
    .select({
      id: entry.id,
      notebook: notebook.code,
      leaf: entry.leaf,
      title: entry.title,
      workDate: entry.workDate,
      authorId: entry.authorId,
      signedAt: signature.signedAt,
      asked: sql<boolean>`${witnessRequest.id} is not null`,
      openQuestions: sql<number>`(select count(*) from ${question} where ${question.entryId} = ${entry.id} and ${question.state} = 'open')`,
    })
    .from(entry)
    .innerJoin(notebook, eq(notebook.id, entry.notebookId))
    .innerJoin(
      notebookMember,
      and(
        eq(notebookMember.notebookId, entry.notebookId),
        eq(notebookMember.userId, personId),
        inArray(notebookMember.role, ['lead', 'author', 'witness']),
      ),
    )
    .leftJoin(entryContributor, and(eq(entryContributor.entryId, entry.id), eq(entryContributor.userId, personId)))
    .leftJoin(witnessRequest, and(eq(witnessRequest.entryId, entry.id), eq(witnessRequest.witnessId, personId)))
    .leftJoin(signature, and(eq(signature.entryId, entry.id), eq(signature.kind, 'author')))
    .where(and(eq(entry.state, 'signed'), ne(entry.authorId, personId), isNull(entryContributor.userId)))
    .orderBy(sql`${witnessRequest.id} is null`, asc(signature.signedAt));
  const people = await peopleById(
    db,
    rows.map((row) => row.authorId),
  );
  return rows.map(({ authorId, ...row }) => ({
    ...row,
    author: people.get(authorId)!,
    signedAt: row.signedAt?.toISOString() ?? null,
    openQuestions: Number(row.openQuestions),
  }));
}

/** How many entries wait for this person by name. */
export async function countWaiting(personId: string): Promise<number> {
  const [row] = await (
    await getDb()
  )
    .select({ count: sql<number>`count(*)` })
    .from(witnessRequest)
    .innerJoin(entry, and(eq(entry.id, witnessRequest.entryId), eq(entry.state, 'signed')))
    .where(and(eq(witnessRequest.witnessId, personId), isNull(witnessRequest.closedAt)));
  return Number(row.count);
}

export type TodayDto = {
  drafts: { id: string; notebook: string; leaf: number; title: string; workDate: string; changedAt: string }[];
  queue: QueueLine[];
  answersOwed: { entryId: string; title: string; text: string }[];
  cooldowns: { id: string; name: string; cryostat: string; startedOn: string; baseTemperature: string }[];
  unsigned: { id: string; notebook: string; leaf: number; title: string; author: string; days: number }[];
};

/** What the day begins with: own drafts, what waits for this person, running cooldowns, and in notebooks they lead unsigned work by age. */
export async function readToday(personId: string): Promise<TodayDto> {
  const db = await getDb();
  const mine = (notebookId: typeof entry.notebookId | typeof cooldown.notebookId) =>
    and(eq(notebookMember.notebookId, notebookId), eq(notebookMember.userId, personId));
  const drafts = await db
    .select({
      id: entry.id,
      notebook: notebook.code,
      leaf: entry.leaf,
      title: entry.title,
      workDate: entry.workDate,
      changedAt: entry.changedAt,
    })
    .from(entry)
    .innerJoin(notebook, eq(notebook.id, entry.notebookId))
    .innerJoin(notebookMember, mine(entry.notebookId))
    .where(and(eq(entry.authorId, personId), eq(entry.state, 'draft')))
    .orderBy(sql`${entry.changedAt} desc`)
    .limit(50);
  const answersOwed = await db
    .select({ entryId: entry.id, title: entry.title, text: question.text })
    .from(question)
    .innerJoin(entry, eq(entry.id, question.entryId))
    .innerJoin(notebookMember, mine(entry.notebookId))
    .where(and(eq(entry.authorId, personId), eq(question.state, 'open')))
    .orderBy(asc(question.askedAt));
  const cooldowns = await db
    .select({
      id: cooldown.id,
      name: cooldown.name,
      cryostat: cooldown.cryostat,
      startedOn: cooldown.startedOn,
      baseTemperature: cooldown.baseTemperature,
    })
    .from(cooldown)
    .innerJoin(notebookMember, mine(cooldown.notebookId))
    .where(isNull(cooldown.endedOn))
    .orderBy(asc(cooldown.startedOn));
  const unsigned = await db
    .select({
      id: entry.id,
      notebook: notebook.code,
      leaf: entry.leaf,
      title: entry.title,
      authorId: entry.authorId,
      workDate: entry.workDate,
    })
    .from(entry)
    .innerJoin(notebook, eq(notebook.id, entry.notebookId))
    .innerJoin(notebookMember, and(mine(entry.notebookId), eq(notebookMember.role, 'lead')))
    .where(eq(entry.state, 'draft'))
    .orderBy(asc(entry.workDate))
    .limit(50);
  const people = await peopleById(
    db,
    unsigned.map((row) => row.authorId),
  );
  return {
    drafts: drafts.map((row) => ({ ...row, changedAt: row.changedAt.toISOString() })),
    queue: (await readQueue(personId)).slice(0, 20),
    answersOwed,
    cooldowns,
    unsigned: unsigned.map(({ authorId, workDate, ...row }) => ({
      ...row,
      author: people.get(authorId)!.name,
      days: Math.max(0, Math.floor((Date.now() - Date.parse(workDate)) / 86_400_000)),
    })),
  };
}
