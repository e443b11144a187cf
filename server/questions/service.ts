import 'server-only';
import { now } from '@/server/clock/service';
import { randomUUID } from 'node:crypto';
import { asc, eq, inArray } from 'drizzle-orm';
import { z } from 'zod';
import { AppError } from '@/lib/errors/app-error';
import { blockIdSchema } from '@/lib/document/attributes';
import type { QuestionDto } from '@/lib/schemas/entry';
import type { Person } from '@/server/access/person';
import type { ScopeOf } from '@/server/access/scope';
import { getDb, type DbOrTx } from '@/server/db/client';
import { entry, entryVersion } from '@/server/db/schema/entries';
import { answer, question } from '@/server/db/schema/signing';
import { env } from '@/server/env/env';
import { appendLog } from '@/server/log/service';
import { queueMail } from '@/server/mail/service';
import { addressesOf, peopleById } from '@/server/people/service';

const plainTextSchema = (longest: number, empty: string) =>
  z
    .string()
    .trim()
    .min(1, empty)
    .max(longest)
    .refine((text) => text.isWellFormed(), 'The text holds broken characters.');

export const askSchema = z
  .object({
    versionDigest: z.string().length(64),
    blockId: z.nullable(blockIdSchema),
    quote: z.string().max(500),
    text: plainTextSchema(4000, 'Write the question first.'),
    requestKey: z.uuid().optional(),
  })
  .strict();
export const answerSchema = z.object({ text: plainTextSchema(4000, 'Write the answer first.') }).strict();

/** Questions of an entry, oldest first, with their answers. */
export async function questionsOf(db: DbOrTx, entryId: string, readerId: string): Promise<QuestionDto[]> {
  const rows = await db
    .select({ question, authorId: entry.authorId, state: entry.state })
    .from(question)
    .innerJoin(entry, eq(entry.id, question.entryId))
    .where(eq(question.entryId, entryId))
    .orderBy(asc(question.askedAt));
  if (rows.length === 0) return [];
  const answers = await db
    .select()
    .from(answer)
    .where(
      inArray(
        answer.questionId,
        rows.map((row) => row.question.id),
      ),
    )
    .orderBy(asc(answer.answeredAt));
  const people = await peopleById(db, [...rows.map((r) => r.question.askedBy), ...answers.map((a) => a.answeredBy)]);
  return rows.map(({ question: q, authorId }) => ({
    id: q.id,
    entryId: q.entryId,
    versionDigest: q.versionDigest,
    blockId: q.blockId,
    quote: q.quote,
    text: q.text,
    askedBy: people.get(q.askedBy)!,
    askedAt: q.askedAt.toISOString(),
    state: q.state,
    answers: answers
      .filter((a) => a.questionId === q.id)
      .map((a) => ({ id: a.id, text: a.text, by: people.get(a.answeredBy)!, at: a.answeredAt.toISOString() })),
    mayAnswer: q.state === 'open' && (authorId === readerId || q.askedBy !== readerId),
  }));
}

/** Asks at a place of the version that was read; the author gets a mail. */
export async function ask(scope: ScopeOf<'entry.ask'>, input: z.infer<typeof askSchema>): Promise<QuestionDto> {
  const db = await getDb();
  const { entry: about, person, notebook } = scope;
  const id = await db.transaction(async (tx) => {
    if (input.requestKey) {
      const [known] = await tx
        .select({ id: question.id, askedBy: question.askedBy })
        .from(question)
        .where(eq(question.requestKey, input.requestKey));
      if (known?.askedBy === person.id) return known.id;
    }
    const versions = await tx
      .select({ digest: entryVersion.digest })
      .from(entryVersion)
      .where(eq(entryVersion.entryId, about.id));
    if (!versions.some((version) => version.digest === input.versionDigest)) {
      throw new AppError(
        'invalid',
        'The question names a version that this entry does not have. Reload the page; your text is kept.',
      );
    }
    const made = randomUUID();
    await tx.insert(question).values({
      id: made,
      entryId: about.id,
      versionDigest: input.versionDigest,
      blockId: input.blockId,
      quote: input.quote,
      text: input.text,
      askedBy: person.id,
      askedAt: now(),
      requestKey: input.requestKey ?? null,
    });
    await appendLog(tx, {
      kind: 'question',
      actorId: person.id,
      notebookId: about.notebookId,
      entryId: about.id,
      detail: { question: made },
    });
    const to = (await addressesOf(tx, [about.authorId])).get(about.authorId);
    if (to && about.authorId !== person.id) {
      await queueMail(tx, {
        to,
        subject: `Question on ${notebook.code} leaf ${about.leaf}`,
        lines: [
          `${person.name} asks about “${about.title}”:`,
          input.text,
          `Answer here: ${env().baseUrl}/entries/${about.id}`,
        ],
      });
    }
    return made;
  });
  return oneQuestion(db, about.id, id, person);
}

/** Answers; the question is then no longer open, and who asked gets a mail. */
export async function answerQuestion(scope: ScopeOf<'question.answer'>, text: string): Promise<QuestionDto> {
  const db = await getDb();
  const { person, notebook, entry: about } = scope;
  await db.transaction(async (tx) => {
    const [row] = await tx.select().from(question).where(eq(question.id, scope.questionId)).for('update');
    if (row.state === 'answered')
      throw new AppError(
        'conflict',
        'This question is answered already. Reload the page to read the answer; your text is kept.',
      );
    if (row.askedBy === person.id && about.authorId !== person.id) {
      throw new AppError('not_allowed', 'Somebody else answers your question.');
    }
    await tx
      .insert(answer)
      .values({ id: randomUUID(), questionId: row.id, text, answeredBy: person.id, answeredAt: now() });
    await tx.update(question).set({ state: 'answered' }).where(eq(question.id, row.id));
    await appendLog(tx, {
      kind: 'answer',
      actorId: person.id,
      notebookId: about.notebookId,
      entryId: about.id,
      detail: { question: row.id },
    });
    const to = (await addressesOf(tx, [row.askedBy])).get(row.askedBy);
    if (to && row.askedBy !== person.id) {
      await queueMail(tx, {
        to,
        subject: `Answer on ${notebook.code} leaf ${about.leaf}`,
        lines: [
          `${person.name} answers your question on “${about.title}”:`,
          text,
          `Read on: ${env().baseUrl}/entries/${about.id}`,
        ],
      });
    }
  });
  return oneQuestion(db, about.id, scope.questionId, person);
}

async function oneQuestion(db: DbOrTx, entryId: string, id: string, reader: Person): Promise<QuestionDto> {
  return (await questionsOf(db, entryId, reader.id)).find((q) => q.id === id)!;
}
