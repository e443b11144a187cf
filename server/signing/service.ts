import 'server-only';
import { askWitnesses, countersignObstacle } from './witness-service';
import { headVersion, record, shownDigest, toSignatureDto, type Purpose } from './statements';
import { now } from '@/server/clock/service';
import { randomUUID } from 'node:crypto';
import { and, asc, eq, isNull } from 'drizzle-orm';
import { readRecord } from '@/lib/document/version';
import { AppError } from '@/lib/errors/app-error';
import type { BindingDto, ChallengeDto, SignInput } from '@/lib/schemas/signing';
import type { SignatureDto } from '@/lib/schemas/entry';
import type { Person } from '@/server/access/person';
import { takeTurn } from '@/server/access/rate';
import type { ScopeOf } from '@/server/access/scope';
import { verifyOwnPassword } from '@/server/accounts/service';
import { getDb, type DbOrTx, type Tx } from '@/server/db/client';
import { entry, entryDraft, trace } from '@/server/db/schema/entries';
import { notebookMember } from '@/server/db/schema/notebooks';
import { challenge, signature, witnessRequest } from '@/server/db/schema/signing';
import { env } from '@/server/env/env';
import { queueMail } from '@/server/mail/service';
import { addressesOf } from '@/server/people/service';
import { questionsOf } from '@/server/questions/service';
import { unfinished } from './binding';
import { daysSince, meanings } from './meaning';

const challengeMinutes = 10;

type Signable = ScopeOf<'entry.sign'> | ScopeOf<'entry.countersign'>;

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

export async function signaturesOf(db: DbOrTx, entryId: string): Promise<SignatureDto[]> {
  const rows = await db.select().from(signature).where(eq(signature.entryId, entryId)).orderBy(asc(signature.signedAt));
  return rows.map(toSignatureDto);
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
