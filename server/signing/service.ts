import 'server-only';
import { now } from '@/server/clock/service';
import { randomUUID } from 'node:crypto';
import { and, asc, eq, inArray, isNull } from 'drizzle-orm';
import { readRecord } from '@/lib/document/version';
import { AppError } from '@/lib/errors/app-error';
import type { BindingDto, ChallengeDto, SignInput } from '@/lib/schemas/signing';
import type { SignatureDto } from '@/lib/schemas/entry';
import type { Person } from '@/server/access/person';
import { takeTurn } from '@/server/access/rate';
import type { ScopeOf } from '@/server/access/scope';
import { verifyOwnPassword } from '@/server/accounts/service';
import { getDb, type DbOrTx, type Tx } from '@/server/db/client';
import { entry, entryContributor, entryDraft, entryVersion, trace } from '@/server/db/schema/entries';
import { notebookMember } from '@/server/db/schema/notebooks';
import { challenge, question, signature, traceServed, witnessRequest } from '@/server/db/schema/signing';
import { sealRecord } from '@/server/digest/service';
import { env, secrets } from '@/server/env/env';
import { appendLog } from '@/server/log/service';
import { queueMail } from '@/server/mail/service';
import { addressesOf } from '@/server/people/service';
import { questionsOf } from '@/server/questions/service';
import { unfinished } from './binding';
import { daysSince, meanings } from './meaning';

const challengeMinutes = 10;

type Signable = ScopeOf<'entry.sign'> | ScopeOf<'entry.countersign'>;
type Purpose = 'sign' | 'countersign';

async function headVersion(db: DbOrTx, entryId: string, headSeq: number) {
  const [row] = await db
    .select()
    .from(entryVersion)
    .where(and(eq(entryVersion.entryId, entryId), eq(entryVersion.seq, headSeq)));
  if (!row) throw new AppError('invalid', 'This entry has no version yet. Cut one first (Ctrl+S in the text).');
  return row;
}

/** Exactly what a signature would bind now. */
export async function readBinding(scope: Signable, purpose: Purpose): Promise<BindingDto> {
  const db = await getDb();
  const { entry: about, person, notebook } = scope;
  const version = await headVersion(db, about.id, about.headSeq);
  const record = readRecord(version.canonical);
  const [draft] = await db
    .select({ revision: entryDraft.revision, cutRevision: entryDraft.cutRevision })
    .from(entryDraft)
    .where(eq(entryDraft.entryId, about.id));
  const attached = await db
    .select({ id: trace.id, fileName: trace.fileName })
    .from(trace)
    .where(eq(trace.entryId, about.id));
  const days = daysSince(about.workDate, now(), 'UTC');
  return {
    title: record.title,
    notebook: record.notebook,
    leaf: record.leaf,
    workDate: record.workDate,
    seq: version.seq,
    digest: version.digest,
    values: record.values.map(({ symbol, source, text, error }) => ({ symbol, source, text, error })),
    traces: record.traces.map(({ handle, fileName, bytes, sha256 }) => ({ handle, fileName, bytes, sha256 })),
    pictures: record.pictures.map(({ fileName, sha256 }) => ({ fileName, sha256 })),
    questions: (await questionsOf(db, about.id, person.id)).length,
    meaning: purpose === 'sign' ? meanings.author : meanings.witness,
    printedName: person.name,
    late: purpose === 'sign' && days > notebook.lateAfterDays ? { days, limit: notebook.lateAfterDays } : null,
    warnings: unfinished(record, attached),
    draftIsNewer: purpose === 'sign' && draft.revision !== draft.cutRevision,
    revision: draft.revision,
  };
}

/** Digest of what stands on the page beside the version: the questions with their answers. */
async function shownDigest(db: DbOrTx, entryId: string, purpose: Purpose, readerId: string): Promise<string> {
  const questions = purpose === 'countersign' ? await questionsOf(db, entryId, readerId) : [];
  return sealRecord(
    questions.map((q) => ({
      id: q.id,
      text: q.text,
      state: q.state,
      answers: q.answers.map((a) => ({ id: a.id, text: a.text })),
    })),
  ).digest;
}

/**
 * A one-time challenge for one person, purpose, entry and version, good for ten minutes.
 * @throws AppError conflict when that version is not the newest.
 */
export async function issueChallenge(scope: Signable, purpose: Purpose, versionDigest: string): Promise<ChallengeDto> {
  await takeTurn(`challenge:${scope.person.id}`, 60, 600);
  const db = await getDb();
  const version = await headVersion(db, scope.entry.id, scope.entry.headSeq);
  if (version.digest !== versionDigest) throw newerVersion();
  const issuedAt = now();
  const row = {
    id: randomUUID(),
    userId: scope.person.id,
    purpose,
    entryId: scope.entry.id,
    versionDigest,
    shownDigest: await shownDigest(db, scope.entry.id, purpose, scope.person.id),
    issuedAt,
    expiresAt: new Date(issuedAt.getTime() + challengeMinutes * 60_000),
  };
  await db.insert(challenge).values(row);
  return {
    challengeId: row.id,
    purpose,
    expiresAt: row.expiresAt.toISOString(),
    meaning: purpose === 'sign' ? meanings.author : meanings.witness,
    printedName: scope.person.name,
    serverTime: issuedAt.toISOString(),
  };
}

const newerVersion = () =>
  new AppError(
    'conflict',
    'There is a newer version than the one on this page. Nothing was signed; read the newest one first.',
  );

/** Checks and uses up the challenge, inside the signing transaction. */
async function spendChallenge(
  tx: Tx,
  person: Person,
  entryId: string,
  purpose: Purpose,
  input: Omit<SignInput, 'password'>,
): Promise<void> {
  const [row] = await tx.select().from(challenge).where(eq(challenge.id, input.challengeId)).for('update');
  const fits =
    row &&
    row.userId === person.id &&
    row.entryId === entryId &&
    row.purpose === purpose &&
    row.versionDigest === input.versionDigest;
  if (!fits)
    throw new AppError(
      'invalid',
      'This signing step does not belong to this page. Nothing was signed; reload the page.',
    );
  if (row.usedAt)
    throw new AppError('conflict', 'This signing step was used already. Reload the page to see what was signed.');
  if (row.expiresAt < now())
    throw new AppError(
      'gone',
      'The page stood open for more than ten minutes. Nothing was signed; reload it and sign again.',
    );
  if (row.shownDigest !== (await shownDigest(tx, entryId, purpose, person.id))) {
    throw new AppError(
      'conflict',
      'A question or an answer came in while this page was open. Nothing was signed; reload the page and read it.',
    );
  }
  await tx.update(challenge).set({ usedAt: now() }).where(eq(challenge.id, row.id));
}

/** The author's signature on the newest version. After it the entry is frozen. */
export async function sign(scope: ScopeOf<'entry.sign'>, input: SignInput): Promise<SignatureDto> {
  await verifyOwnPassword(scope.person, input.password, 'sign');
  return signVerified(scope, input);
}

/** As `sign`, for a caller that has checked the signer's secret. */
export async function signVerified(
  scope: ScopeOf<'entry.sign'>,
  input: Omit<SignInput, 'password'>,
): Promise<SignatureDto> {
  const { person, notebook } = scope;
  const db = await getDb();
  return db.transaction(async (tx) => {
    const [about] = await tx.select().from(entry).where(eq(entry.id, scope.entry.id)).for('update');
    if (about.state !== 'draft') throw new AppError('conflict', 'This entry is signed already.');
    const version = await headVersion(tx, about.id, about.headSeq);
    if (version.digest !== input.versionDigest) throw newerVersion();
    const [draft] = await tx.select().from(entryDraft).where(eq(entryDraft.entryId, about.id));
    if (draft.revision !== draft.cutRevision) {
      throw new AppError(
        'conflict',
        'The draft has changed since this version was cut. Nothing was signed; cut a version of the newest text first.',
      );
    }
    await spendChallenge(tx, person, about.id, 'sign', input);
    const at = now();
    const days = daysSince(about.workDate, at, input.zone);
    const late = days > notebook.lateAfterDays;
    if (late && !input.lateReason) {
      throw new AppError(
        'invalid',
        `The work was ${days} days ago and the limit is ${notebook.lateAfterDays}. Give the reason for signing late.`,
        { field: 'lateReason' },
      );
    }
    const made = await record(tx, {
      about,
      person,
      notebook: notebook.code,
      kind: 'author',
      version,
      now: at,
      input,
      late: late ? { days, limit: notebook.lateAfterDays, reason: input.lateReason } : null,
    });
    await tx.update(entry).set({ state: 'signed', changedAt: at }).where(eq(entry.id, about.id));
    await askWitnesses(tx, { about, person, code: notebook.code }, input.witnessIds);
    return made;
  });
}

/** The witness's countersignature. Refused, with the reason, where the witness rules do not hold. */
export async function countersign(scope: ScopeOf<'entry.countersign'>, input: SignInput): Promise<SignatureDto> {
  await verifyOwnPassword(scope.person, input.password, 'countersign');
  return countersignVerified(scope, input);
}

/** As `countersign`, for a caller that has checked the signer's secret. */
export async function countersignVerified(
  scope: ScopeOf<'entry.countersign'>,
  input: Omit<SignInput, 'password'>,
): Promise<SignatureDto> {
  const { person, notebook } = scope;
  const db = await getDb();
  return db.transaction(async (tx) => {
    const [about] = await tx.select().from(entry).where(eq(entry.id, scope.entry.id)).for('update');
    if (about.state !== 'signed')
      throw new AppError('conflict', 'Somebody else countersigned this entry at that moment. Nothing more is needed.');
    const version = await headVersion(tx, about.id, about.headSeq);
    if (version.digest !== input.versionDigest) throw newerVersion();
    const obstacle = await countersignObstacle(tx, about, person.id);
    if (obstacle) throw new AppError('not_allowed', obstacle);
    await spendChallenge(tx, person, about.id, 'countersign', input);
    const at = now();
    const made = await record(tx, {
      about,
      person,
      notebook: notebook.code,
      kind: 'witness',
      version,
      now: at,
      input,
      late: null,
    });
    await tx.update(entry).set({ state: 'witnessed', changedAt: at }).where(eq(entry.id, about.id));
    await tx
      .update(witnessRequest)
      .set({ closedAt: at })
      .where(and(eq(witnessRequest.entryId, about.id), isNull(witnessRequest.closedAt)));
    const leads = await tx
      .select({ id: notebookMember.userId })
      .from(notebookMember)
      .where(and(eq(notebookMember.notebookId, about.notebookId), eq(notebookMember.role, 'lead')));
    const addresses = await addressesOf(tx, [about.authorId, person.id, ...leads.map((lead) => lead.id)]);
    for (const to of addresses.values()) {
      await queueMail(tx, {
        to,
        subject: `${notebook.code} leaf ${about.leaf} is countersigned`,
        lines: [
          `${person.name} has countersigned “${about.title}”, version ${version.seq}.`,
          `Digest of the version: ${version.digest}`,
          `${env().baseUrl}/entries/${about.id}`,
        ],
      });
    }
    return made;
  });
}

type Recording = {
  about: typeof entry.$inferSelect;
  person: Person;
  notebook: string;
  kind: 'author' | 'witness';
  version: typeof entryVersion.$inferSelect;
  now: Date;
  input: Omit<SignInput, 'password'>;
  late: { days: number; limit: number; reason: string | null } | null;
};

async function record(tx: Tx, r: Recording): Promise<SignatureDto> {
  const authors =
    r.kind === 'witness'
      ? await tx
          .select()
          .from(signature)
          .where(and(eq(signature.versionDigest, r.version.digest), eq(signature.kind, 'author')))
      : [];
  const statement = sealRecord({
    format: 'kelvinleaf-statement',
    number: 1,
    kind: r.kind === 'author' ? 'signature' : 'countersignature',
    attestation: 'attested by the server',
    installation: secrets().installation,
    notebook: r.notebook,
    leaf: r.about.leaf,
    entry: r.about.id,
    versionDigest: r.version.digest,
    signer: { id: r.person.id, printedName: r.person.name },
    meaning: meanings[r.kind],
    time: r.now.toISOString(),
    zone: r.input.zone,
    late: r.late,
    authorStatementDigest: authors[0]?.statementDigest ?? null,
    questionsDigest: r.kind === 'witness' ? await shownDigest(tx, r.about.id, 'countersign', r.person.id) : null,
  });
  const row = {
    id: randomUUID(),
    entryId: r.about.id,
    kind: r.kind,
    versionDigest: r.version.digest,
    signerId: r.person.id,
    printedName: r.person.name,
    meaning: meanings[r.kind],
    signedAt: r.now,
    zone: r.input.zone,
    lateReason: r.late?.reason ?? null,
    statement: statement.canonical,
    statementDigest: statement.digest,
    attestation: 'server' as const,
  };
  await tx.insert(signature).values(row);
  await appendLog(tx, {
    kind: r.kind === 'author' ? 'signature' : 'countersignature',
    actorId: r.person.id,
    notebookId: r.about.notebookId,
    entryId: r.about.id,
    detail: { versionDigest: r.version.digest, statementDigest: statement.digest },
  });
  return toSignatureDto(row);
}

function toSignatureDto(row: typeof signature.$inferSelect): SignatureDto {
  return {
    id: row.id,
    kind: row.kind,
    printedName: row.printedName,
    meaning: row.meaning,
    signedAt: row.signedAt.toISOString(),
    zone: row.zone,
    versionDigest: row.versionDigest,
    attestation: row.attestation,
    lateReason: row.lateReason,
    statement: new TextDecoder().decode(row.statement),
  };
}

export async function signaturesOf(db: DbOrTx, entryId: string): Promise<SignatureDto[]> {
  const rows = await db.select().from(signature).where(eq(signature.entryId, entryId)).orderBy(asc(signature.signedAt));
  return rows.map(toSignatureDto);
}

async function askWitnesses(
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

/** Revision of the draft that a version would be cut from. */
export async function readRevision(entryId: string): Promise<number> {
  const [draft] = await (
    await getDb()
  )
    .select({ revision: entryDraft.revision })
    .from(entryDraft)
    .where(eq(entryDraft.entryId, entryId));
  return draft.revision;
}
