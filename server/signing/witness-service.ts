import 'server-only';
import { headVersion } from './statements';
import { now } from '@/server/clock/service';
import { randomUUID } from 'node:crypto';
import { and, eq, inArray } from 'drizzle-orm';
import { readRecord } from '@/lib/document/version';
import { AppError } from '@/lib/errors/app-error';
import type { Person } from '@/server/access/person';
import type { ScopeOf } from '@/server/access/scope';
import { getDb, type DbOrTx, type Tx } from '@/server/db/client';
import { entry, entryContributor, entryVersion } from '@/server/db/schema/entries';
import { notebookMember } from '@/server/db/schema/notebooks';
import { question, traceServed, witnessRequest } from '@/server/db/schema/signing';
import { env } from '@/server/env/env';
import { appendLog } from '@/server/log/service';
import { queueMail } from '@/server/mail/service';
import { addressesOf } from '@/server/people/service';

export async function askWitnesses(
  tx: Tx,
  on: { about: typeof entry.$inferSelect; person: Person; code: string },
  ids: string[],
): Promise<void> {
  const { about, person, code } = on;
  if (ids.length === 0) return;
  const members = await tx
    .select({ id: notebookMember.userId })
    .from(notebookMember)
    .where(
      and(
        eq(notebookMember.notebookId, about.notebookId),
        inArray(notebookMember.userId, ids),
        inArray(notebookMember.role, ['lead', 'author', 'witness']),
      ),
    );
  const wrote = await tx
    .select({ id: entryContributor.userId })
    .from(entryContributor)
    .where(eq(entryContributor.entryId, about.id));
  const barred = new Set([about.authorId, ...wrote.map((c) => c.id)]);
  for (const id of new Set(ids)) {
    if (barred.has(id) || !members.some((member) => member.id === id)) {
      throw new AppError(
        'invalid',
        'A witness must be a lead, author or witness of this notebook who took no part in the entry. Nothing was signed; choose another.',
        { field: 'witnessIds' },
      );
    }
    await tx
      .insert(witnessRequest)
      .values({ id: randomUUID(), entryId: about.id, witnessId: id, requestedBy: person.id })
      .onConflictDoNothing();
    const to = (await addressesOf(tx, [id])).get(id);
    if (to) {
      await queueMail(tx, {
        to,
        subject: `Please countersign ${code} leaf ${about.leaf}`,
        lines: [
          `${person.name} has signed “${about.title}” and asks you to countersign it.`,
          `Read it here: ${env().baseUrl}/entries/${about.id}`,
        ],
      });
    }
  }
  await appendLog(tx, {
    kind: 'witness asked',
    actorId: person.id,
    notebookId: about.notebookId,
    entryId: about.id,
    detail: { witnesses: ids },
  });
}

/** The author asks further colleagues after signing. */
export async function requestWitnesses(scope: ScopeOf<'entry.requestWitness'>, ids: string[]): Promise<void> {
  const db = await getDb();
  await db.transaction((tx) =>
    askWitnesses(tx, { about: scope.entry, person: scope.person, code: scope.notebook.code }, ids),
  );
}

/** How many of the head version's traces this person has been served. */
export async function tracesSeen(
  db: DbOrTx,
  about: typeof entry.$inferSelect,
  personId: string,
): Promise<{ traces: number; of: number }> {
  if (about.headSeq === 0) return { traces: 0, of: 0 };
  const version = await headVersion(db, about.id, about.headSeq);
  const wanted = new Set(readRecord(version.canonical).traces.map((t) => t.traceId));
  const served = await db
    .select({ id: traceServed.traceId })
    .from(traceServed)
    .where(and(eq(traceServed.versionDigest, version.digest), eq(traceServed.userId, personId)));
  return { traces: served.filter((row) => wanted.has(row.id)).length, of: wanted.size };
}

/** Why this person cannot countersign now, as a sentence; null when nothing stands in the way. Rights are decided elsewhere. */
export async function countersignObstacle(
  db: DbOrTx,
  about: typeof entry.$inferSelect,
  personId: string,
): Promise<string | null> {
  const open = await db
    .select({ id: question.id })
    .from(question)
    .where(and(eq(question.entryId, about.id), eq(question.state, 'open')));
  if (open.length > 0) {
    return open.length === 1
      ? 'One question is open: countersigning waits for its answer.'
      : `${open.length} questions are open: countersigning waits for their answers.`;
  }
  const seen = await tracesSeen(db, about, personId);
  if (seen.traces < seen.of)
    return `You have seen ${seen.traces} of ${seen.of} traces of this version: open the others first.`;
  return null;
}

/** Notes that a trace of the entry's newest version was served to a reader. */
export async function noteServed(personId: string, about: typeof entry.$inferSelect, traceId: string): Promise<void> {
  if (about.state !== 'signed' || about.authorId === personId) return;
  const db = await getDb();
  const [version] = await db
    .select({ digest: entryVersion.digest })
    .from(entryVersion)
    .where(and(eq(entryVersion.entryId, about.id), eq(entryVersion.seq, about.headSeq)));
  await db
    .insert(traceServed)
    .values({ versionDigest: version.digest, traceId, userId: personId, servedAt: now() })
    .onConflictDoNothing();
}

export async function readObstacle(scope: ScopeOf<'entry.countersign'>): Promise<string | null> {
  return countersignObstacle(await getDb(), scope.entry, scope.person.id);
}
