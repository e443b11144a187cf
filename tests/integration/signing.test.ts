import { createHash } from 'node:crypto';
import { and, eq } from 'drizzle-orm';
import { afterAll, beforeAll, beforeEach, describe, expect, it } from 'vitest';
import { POST as signRoute } from '@/app/api/entries/[id]/signature/route';
import { PUT as putDraft } from '@/app/api/entries/[id]/draft/route';
import { GET as getColumn } from '@/app/api/traces/[id]/columns/[index]/route';
import { GET as getVersion } from '@/app/api/entries/[id]/versions/[seq]/route';
import type { SignatureDto } from '@/lib/schemas/entry';
import { atTime } from '@/server/clock/service';
import { buildWorkers } from '@/server/commands/build-workers.mjs';
import { entry, entryVersion } from '@/server/db/schema/entries';
import { logRecord, mailMessage } from '@/server/db/schema/housekeeping';
import { signature } from '@/server/db/schema/signing';
import { call, startLaboratory, type Laboratory } from './harness';
import * as life from './life';

let lab: Laboratory;
beforeAll(async () => {
  await buildWorkers();
  lab = await startLaboratory();
});
afterAll(() => lab.close());
beforeEach(() => life.forgetTurns(lab));

/**
 * Canonical JSON after RFC 8785 section 3.2, written again here for strings, integers and the decimal numbers that
 * ECMAScript prints: no spaces, members sorted by UTF-16 code units, JSON.stringify's escapes and numbers.
 */
function canonicalText(value: unknown): string {
  if (Array.isArray(value)) return `[${value.map(canonicalText).join(',')}]`;
  if (typeof value === 'object' && value !== null) {
    const members = Object.entries(value).sort(([a], [b]) => (a < b ? -1 : 1));
    return `{${members.map(([key, item]) => `${JSON.stringify(key)}:${canonicalText(item)}`).join(',')}}`;
  }
  return JSON.stringify(value);
}

it('the canonical form written for this test gives the example of RFC 8785', () => {
  // RFC 8785, section 3.2.2 (input) and 3.2.3 (sorted output), with the numbers as ECMAScript reads them.
  const input = JSON.parse(
    '{"numbers":[333333333.33333329,1E30,4.50,2e-3,0.000000000000000000000000001],"string":"\\u20ac$\\u000F\\u000aA\'\\u0042\\u0022\\u005c\\\\\\"\\/","literals":[null,true,false]}',
  );
  expect(canonicalText(input)).toBe(
    '{"literals":[null,true,false],"numbers":[333333333.3333333,1e+30,4.5,0.002,1e-27],"string":"€$\\u000f\\nA\'B\\"\\\\\\\\\\"/"}',
  );
});

describe('the life of an entry', () => {
  let id: string;
  let digest: string;

  it('goes from a draft over versions to the signature of its author, which freezes it', async () => {
    const { author, witness } = lab.people;
    id = await life.create(author, { title: 'Plateau at 4 K' });
    await life.write(author, id, 'Bath at 4.21 K.');
    const first = await life.cut(author, id);
    await life.write(author, id, 'Bath at 4.25 K.');
    const made = await life.sign(author, id, { witnessIds: [witness.id] });
    expect(made).toMatchObject({ kind: 'author', printedName: 'Aron Thorne', zone: 'Europe/Oslo', lateReason: null });
    digest = made.versionDigest;
    const rows = await lab.db.select().from(entryVersion).where(eq(entryVersion.entryId, id));
    expect(rows.map((row) => [row.seq, row.previous])).toEqual([
      [1, null],
      [2, first.digest],
    ]);
    expect(await life.read(author, id)).toMatchObject({ state: 'signed', may: { write: false, sign: false } });
    const refused = await call<life.Refusal>(putDraft, {
      as: author,
      params: { id },
      method: 'PUT',
      body: life.saveBody(3, [life.paragraph('block-one', 'changed')]),
    });
    expect(refused).toMatchObject({ status: 409, body: { error: { code: 'frozen' } } });
  });

  it('stores bytes that hash to the digest and are canonical by RFC 8785', async () => {
    const rows = await lab.db.select().from(entryVersion).where(eq(entryVersion.entryId, id));
    const [statement] = await lab.db.select().from(signature).where(eq(signature.entryId, id));
    const sealed = [
      ...rows.map((row) => [row.canonical, row.digest] as const),
      [statement.statement, statement.statementDigest] as const,
    ];
    expect(sealed).toHaveLength(3);
    for (const [bytes, named] of sealed) {
      expect(createHash('sha256').update(bytes).digest('hex')).toBe(named);
      const text = Buffer.from(bytes).toString('utf8');
      expect(text).toBe(canonicalText(JSON.parse(text)));
    }
    expect(JSON.parse(Buffer.from(statement.statement).toString())).toMatchObject({
      versionDigest: digest,
      signer: { id: lab.people.author.id, printedName: 'Aron Thorne' },
      meaning: 'I carried out this work and this entry records it.',
      late: null,
    });
  });

  it('tells the witness by mail, holds the countersignature while a question is open, and ends witnessed', async () => {
    const { author, witness, lead } = lab.people;
    const mails = await lab.db.select().from(mailMessage).where(eq(mailMessage.recipient, witness.email));
    expect(mails.map((mail) => mail.subject)).toEqual(['Please countersign NB-01 leaf 1']);
    const asked = await life.ask(witness, id, digest, 'Which thermometer?');
    const refused = await life.tryCountersign(witness, id, digest);
    expect(refused).toMatchObject({
      status: 403,
      body: { error: { message: 'One question is open: countersigning waits for its answer.' } },
    });
    await life.answer(author, asked.id, 'The calibrated one beside the sample.');
    expect((await life.tryCountersign(witness, id, digest)).status).toBe(200);
    const now = await life.read(lead, id);
    expect(now.state).toBe('witnessed');
    expect(now.signatures.map((s) => [s.kind, s.versionDigest])).toEqual([
      ['author', digest],
      ['witness', digest],
    ]);
    const [mine, theirs] = await lab.db
      .select()
      .from(signature)
      .where(eq(signature.entryId, id))
      .orderBy(signature.signedAt);
    expect(JSON.parse(Buffer.from(theirs.statement).toString())).toMatchObject({
      authorStatementDigest: mine.statementDigest,
      meaning: 'I have read and understood this entry; I took no part in the work.',
    });
    const told = await lab.db
      .select({ to: mailMessage.recipient })
      .from(mailMessage)
      .where(eq(mailMessage.subject, 'NB-01 leaf 1 is countersigned'));
    expect(told.map((mail) => mail.to).sort()).toEqual([author.email, lead.email, witness.email].sort());
  });

  it('is told in the log, numbered without a gap', async () => {
    const all = await lab.db.select().from(logRecord).orderBy(logRecord.seq);
    expect(all.map((row) => row.seq)).toEqual(all.map((_, index) => index + 1));
    expect(all.filter((row) => row.entryId === id).map((row) => row.kind)).toEqual([
      'entry created',
      'version',
      'version',
      'signature',
      'witness asked',
      'question',
      'answer',
      'countersignature',
    ]);
  });
});

describe('a countersignature is refused, with its reason, to', () => {
  let id: string;
  let digest: string;
  let traceId: string;
  beforeAll(async () => {
    const { author, second, lead } = lab.people;
    id = await life.create(author);
    traceId = await life.attach(lab, author, id, 'scan.csv', Buffer.from('t / s,I / pA\n0,1\n1,2\n'));
    await life.invite(author, id, second);
    await life.write(author, id, [life.paragraph('block-one', 'By Aron.')]);
    await life.write(second, id, [life.paragraph('block-one', 'By Aron and Sara.'), life.traceBlock(traceId)]);
    // Sara writes in an earlier version only; Lea was invited and never wrote.
    await life.cut(author, id);
    await life.write(author, id, [life.paragraph('block-one', 'By Aron again.'), life.traceBlock(traceId)]);
    await life.invite(author, id, lead);
    ({ versionDigest: digest } = await life.sign(author, id));
  });
  const refusal = async (as: 'author' | 'second' | 'lead' | 'reader' | 'witness', of = digest) => {
    const { status, body } = await life.tryCountersign(lab.people[as], id, of);
    return [status, body.error?.message];
  };

  it('the author', async () => {
    expect(await refusal('author')).toEqual([
      403,
      'This is your own entry: a colleague who took no part in the work countersigns it.',
    ]);
  });
  it('a contributor of an earlier version, and a colleague who was invited to write', async () => {
    const sentence = 'You have contributed to this entry: a colleague who took no part in the work countersigns it.';
    expect(await refusal('second')).toEqual([403, sentence]);
    expect(await refusal('lead')).toEqual([403, sentence]);
  });
  it('a reader', async () => {
    expect(await refusal('reader')).toEqual([
      403,
      'This needs the role lead, author or witness in the notebook; yours is reader.',
    ]);
  });
  it('a witness who has not been served every trace', async () => {
    expect(await refusal('witness')).toEqual([
      403,
      'You have seen 0 of 1 traces of this version: open the others first.',
    ]);
    expect((await life.read(lab.people.witness, id)).seen).toEqual({ traces: 0, of: 1 });
  });
  it('a witness who names another version than the newest', async () => {
    const { body: first } = await call<{ digest: string }>(getVersion, {
      as: lab.people.witness,
      params: { id, seq: '1' },
    });
    expect(await refusal('witness', first.digest)).toEqual([
      409,
      'There is a newer version than the one on this page. Nothing was signed; read the newest one first.',
    ]);
  });
  it('nobody more, once the trace was served', async () => {
    const served = await call(getColumn, { as: lab.people.witness, params: { id: traceId, index: '1' } });
    expect(served.status).toBe(200);
    expect(await refusal('witness')).toEqual([200, undefined]);
  });
});

it('a signature after the limit needs a reason and is marked late', async () => {
  const { author } = lab.people;
  const id = await life.create(author, { workDate: '2031-03-04' });
  await life.write(author, id, 'Done on the fourth.');
  // Work on 4 March, signed on 8 March: 4 days, one more than the limit of 3.
  const late = await atTime(new Date('2031-03-08T10:00:00Z'), async () => {
    const { digest } = await life.cut(author, id);
    const challengeId = await life.challenge(author, id, digest);
    const attempt = (lateReason: string | null) =>
      call<SignatureDto & life.Refusal>(signRoute, {
        as: author,
        params: { id },
        body: life.signBody(challengeId, digest, { lateReason }),
      });
    const refused = await attempt(null);
    expect(refused).toMatchObject({
      status: 422,
      body: {
        error: {
          field: 'lateReason',
          message: 'The work was 4 days ago and the limit is 3. Give the reason for signing late.',
        },
      },
    });
    return attempt('The cryostat was being repaired.');
  });
  expect(late.status).toBe(200);
  expect(late.body.lateReason).toBe('The cryostat was being repaired.');
  expect(JSON.parse(late.body.statement).late).toEqual({
    days: 4,
    limit: 3,
    reason: 'The cryostat was being repaired.',
  });
});

it('a signature on the last day of the limit is not late', async () => {
  const { author } = lab.people;
  const id = await life.create(author, { workDate: '2031-03-04' });
  const made = await atTime(new Date('2031-03-07T22:30:00Z'), async () => {
    await life.write(author, id, 'Done on the fourth.');
    return life.sign(author, id);
  });
  // 23:30 on the seventh in Oslo.
  expect(JSON.parse(made.statement).late).toBeNull();
});

it('of two witnesses at once one countersigns, and the other is told so', async () => {
  const { author, witness, lead } = lab.people;
  const id = await life.create(author);
  await life.write(author, id, 'For two witnesses.');
  const { versionDigest } = await life.sign(author, id);
  const answers = await Promise.all([
    life.tryCountersign(witness, id, versionDigest),
    life.tryCountersign(lead, id, versionDigest),
  ]);
  expect(answers.map((a) => a.status).sort()).toEqual([200, 409]);
  const refused = answers.find((a) => a.status === 409);
  expect(refused?.body.error.message).toMatch(/countersigned/);
  const kept = await lab.db
    .select()
    .from(signature)
    .where(and(eq(signature.entryId, id), eq(signature.kind, 'witness')));
  expect(kept).toHaveLength(1);
});

it('the database itself refuses to change or remove versions, signatures and the log', async () => {
  for (const table of ['entry_version', 'signature', 'log_record']) {
    const column = table === 'log_record' ? 'kind' : 'version_digest';
    const changed = table === 'entry_version' ? 'digest' : column;
    for (const statement of [
      `UPDATE ${table} SET ${changed} = 'forged'`,
      `DELETE FROM ${table}`,
      `TRUNCATE ${table} CASCADE`,
    ]) {
      const error = await lab.db.execute(statement).then(
        () => null,
        (e: unknown) => e as Error & { cause?: { code?: string } },
      );
      expect([statement, error?.cause?.code]).toEqual([statement, 'KL001']);
    }
  }
});

it('a struck-out entry keeps its leaf number, and the next entry takes the next one', async () => {
  const { author } = lab.people;
  const struck = await life.create(author);
  await life.strikeOut(author, struck);
  const next = await life.create(author);
  const [a, b] = [await life.read(author, struck), await life.read(author, next)];
  expect(a).toMatchObject({ state: 'struck out', struckReason: 'Written on the wrong leaf.' });
  expect(b.leaf).toBe(a.leaf + 1);
  const leaves = (await lab.db.select({ leaf: entry.leaf }).from(entry)).map((row) => row.leaf).sort((x, y) => x - y);
  expect(leaves).toEqual(leaves.map((_, index) => index + 1));
});
