import 'server-only';
import { randomUUID } from 'node:crypto';
import { and, eq } from 'drizzle-orm';
import { AppError } from '@/lib/errors/app-error';
import type { SignInput } from '@/lib/schemas/signing';
import type { SignatureDto } from '@/lib/schemas/entry';
import type { Person } from '@/server/access/person';
import { type DbOrTx, type Tx } from '@/server/db/client';
import { entry, entryVersion } from '@/server/db/schema/entries';
import { signature } from '@/server/db/schema/signing';
import { sealRecord } from '@/server/digest/service';
import { secrets } from '@/server/env/env';
import { appendLog } from '@/server/log/service';
import { questionsOf } from '@/server/questions/service';
import { meanings } from './meaning';

export type Purpose = 'sign' | 'countersign';

export async function headVersion(db: DbOrTx, entryId: string, headSeq: number) {
  const [row] = await db
    .select()
    .from(entryVersion)
    .where(and(eq(entryVersion.entryId, entryId), eq(entryVersion.seq, headSeq)));
  if (!row) throw new AppError('invalid', 'This entry has no version yet. Cut one first (Ctrl+S in the text).');
  return row;
}

/** Digest of what stands on the page beside the version: the questions with their answers. */
export async function shownDigest(db: DbOrTx, entryId: string, purpose: Purpose, readerId: string): Promise<string> {
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

export type Recording = {
  about: typeof entry.$inferSelect;
  person: Person;
  notebook: string;
  kind: 'author' | 'witness';
  version: typeof entryVersion.$inferSelect;
  now: Date;
  input: Omit<SignInput, 'password'>;
  late: { days: number; limit: number; reason: string | null } | null;
};

export async function record(tx: Tx, r: Recording): Promise<SignatureDto> {
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

export function toSignatureDto(row: typeof signature.$inferSelect): SignatureDto {
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
