import { createHash, randomUUID } from 'node:crypto';
import { POST as signChallenge } from '@/app/api/entries/[id]/challenge/route';
import { POST as countersignChallenge } from '@/app/api/entries/[id]/countersignature/challenge/route';
import { POST as countersignRoute } from '@/app/api/entries/[id]/countersignature/route';
import { GET as getDraft, PUT as putDraft } from '@/app/api/entries/[id]/draft/route';
import { POST as inviteRoute } from '@/app/api/entries/[id]/contributors/route';
import { POST as askRoute } from '@/app/api/entries/[id]/questions/route';
import { GET as getEntry } from '@/app/api/entries/[id]/route';
import { POST as signRoute } from '@/app/api/entries/[id]/signature/route';
import { POST as strikeRoute } from '@/app/api/entries/[id]/strike/route';
import { POST as cutRoute } from '@/app/api/entries/[id]/versions/route';
import { POST as createRoute } from '@/app/api/notebooks/[code]/entries/route';
import { POST as answerRoute } from '@/app/api/questions/[id]/answers/route';
import type { DraftDto, EntryDto, QuestionDto, SignatureDto, VersionDto } from '@/lib/schemas/entry';
import type { ChallengeDto } from '@/lib/schemas/signing';
import { createAccount } from '@/server/accounts/service';
import { rateCount } from '@/server/db/schema/housekeeping';
import { notebookMember } from '@/server/db/schema/notebooks';
import type { NotebookRole } from '@/lib/schemas/person';
import { receiveFile } from '@/server/traces/service';
import { call, cheapHash, password, signIn, type Answer, type Laboratory, type TestPerson } from './harness';

/** The steps of an entry's life, each through the route that the page uses. Every step throws unless it is accepted. */

export type Refusal = { error: { code: string; message: string; field?: string; details?: Record<string, unknown> } };

export function accepted<T>(answer: Answer<T>): T {
  if (answer.status !== 200) throw new Error(`${answer.status} ${JSON.stringify(answer.body)}`);
  return answer.body;
}

export const today = () => new Date().toISOString().slice(0, 10);

export async function create(
  as: TestPerson,
  facts: Partial<{ title: string; workDate: string; layout: string; code: string }> = {},
): Promise<string> {
  const { title = 'Escape over the exit barrier', workDate = today(), layout = 'empty', code = 'NB-01' } = facts;
  const made = await call<{ id: string }>(createRoute, {
    as,
    params: { code },
    body: { title, workDate, cooldownId: null, deviceIds: [], layout, requestKey: randomUUID() },
  });
  return accepted(made).id;
}

type Block = Record<string, unknown>;
export const paragraph = (id: string, text: string): Block => ({
  type: 'paragraph',
  attrs: { id },
  content: [{ type: 'text', text }],
});

export const draftOf = async (as: TestPerson, id: string): Promise<DraftDto> =>
  accepted(await call<DraftDto>(getDraft, { as, params: { id } }));

export const saveBody = (basedOn: number, content: Block[], title = 'Escape over the exit barrier') => ({
  basedOn,
  title,
  doc: { type: 'doc', content },
  written: {},
  clockOffsetMs: 0,
  saveId: randomUUID(),
});

/** Saves over the newest revision and gives the new one. */
export async function write(as: TestPerson, id: string, content: string | Block[]): Promise<number> {
  const { revision } = await draftOf(as, id);
  const body = saveBody(revision, typeof content === 'string' ? [paragraph('block-one', content)] : content);
  return accepted(await call<{ revision: number }>(putDraft, { as, params: { id }, method: 'PUT', body })).revision;
}

export async function cut(as: TestPerson, id: string, reason: string | null = null): Promise<VersionDto> {
  const { revision } = await draftOf(as, id);
  return accepted(await call<VersionDto>(cutRoute, { as, params: { id }, body: { basedOn: revision, reason } }));
}

export const read = async (as: TestPerson, id: string): Promise<EntryDto> =>
  accepted(await call<EntryDto>(getEntry, { as, params: { id } }));

export async function challenge(
  as: TestPerson,
  id: string,
  versionDigest: string,
  purpose: 'sign' | 'countersign' = 'sign',
): Promise<string> {
  const route = purpose === 'sign' ? signChallenge : countersignChallenge;
  return accepted(await call<ChallengeDto>(route, { as, params: { id }, body: { versionDigest } })).challengeId;
}

export const signBody = (challengeId: string, versionDigest: string, extra: Record<string, unknown> = {}) => ({
  challengeId,
  versionDigest,
  password,
  zone: 'Europe/Oslo',
  lateReason: null,
  witnessIds: [],
  ...extra,
});

/** Cuts and signs; gives the signature. */
export async function sign(as: TestPerson, id: string, extra: Record<string, unknown> = {}): Promise<SignatureDto> {
  const { digest } = await cut(as, id);
  const body = signBody(await challenge(as, id, digest), digest, extra);
  return accepted(await call<SignatureDto>(signRoute, { as, params: { id }, body }));
}

/** Asks for a challenge and countersigns; the answer may be a refusal of either. */
export async function tryCountersign(as: TestPerson, id: string, digest: string): Promise<Answer<Refusal>> {
  const step = await call<ChallengeDto & Refusal>(countersignChallenge, {
    as,
    params: { id },
    body: { versionDigest: digest },
  });
  if (step.status !== 200) return step;
  return call<Refusal>(countersignRoute, { as, params: { id }, body: signBody(step.body.challengeId, digest) });
}

export const ask = async (as: TestPerson, id: string, versionDigest: string, text: string): Promise<QuestionDto> =>
  accepted(
    await call<QuestionDto>(askRoute, { as, params: { id }, body: { versionDigest, blockId: null, quote: '', text } }),
  );

export const answer = async (as: TestPerson, questionId: string, text: string): Promise<QuestionDto> =>
  accepted(await call<QuestionDto>(answerRoute, { as, params: { id: questionId }, body: { text } }));

export const invite = async (as: TestPerson, id: string, colleague: TestPerson): Promise<void> =>
  void accepted(await call(inviteRoute, { as, params: { id }, body: { userId: colleague.id } }));

export const strikeOut = async (as: TestPerson, id: string): Promise<void> =>
  void accepted(await call(strikeRoute, { as, params: { id }, body: { reason: 'Written on the wrong leaf.' } }));

/** A further person, a member of NB-01 where a role is given, signed in. */
export async function newPerson(laboratory: Laboratory, name: string, role: NotebookRole | null): Promise<TestPerson> {
  const email = `${name.toLowerCase().replace(/\W+/g, '.')}@laboratory.example`;
  const passwordHash = cheapHash();
  const id = await laboratory.db.transaction((tx) =>
    createAccount(tx, { email, name, role: 'member', passwordHash, actorId: null }),
  );
  if (role) await laboratory.db.insert(notebookMember).values({ notebookId: laboratory.notebookId, userId: id, role });
  return { id, name, email, cookie: await signIn(email) };
}

/** Limits per person are minutes long; a test that does many steps in seconds lets go of them. */
export const forgetTurns = async (laboratory: Pick<Laboratory, 'db'>): Promise<void> =>
  void (await laboratory.db.delete(rateCount));

/** A file in the entry, as the upload's end records it. Give `picture` bytes that are one. */
export async function attach(
  laboratory: Laboratory,
  as: TestPerson,
  entryId: string,
  fileName: string,
  bytes: Uint8Array,
  kind: 'trace' | 'picture' = 'trace',
): Promise<string> {
  const outcome = await receiveFile({
    kind,
    notebookId: laboratory.notebookId,
    entryId,
    personId: as.id,
    uploadId: randomUUID(),
    fileName,
    mediaType: kind === 'trace' ? 'text/csv' : 'image/png',
    bytes: bytes.length,
    sha256: createHash('sha256').update(bytes).digest('hex'),
    content: (async function* () {
      yield bytes;
    })(),
  });
  if ('error' in outcome) throw new Error(outcome.error);
  return outcome.traceId;
}

/** A trace node over two columns without further settings. */
export const traceBlock = (traceId: string, handle = 't1'): Block => ({
  type: 'trace',
  attrs: {
    id: `block_${handle}_0`,
    traceId,
    handle,
    settings: {
      columns: [
        { name: 't', symbol: 't', unit: 's', gain: null, offset: null },
        { name: 'I', symbol: 'I', unit: 'pA', gain: null, offset: null },
      ],
      scanKind: 'on-off',
      sign: 'as recorded',
      signConvention: 'positive into the drain',
      drive: { frequency: null, waveform: null, amplitude: null, load: null, wait: null, eject: null },
      instrument: { name: null, range: null, bandwidth: null, integrationTime: null, overload: null },
      sweepDirection: null,
    },
    spans: [],
    view: { x: 't', y: ['I'], logX: false, logY: false, range: null },
  },
});

export const valueLine = (id: string, source: string, shown: string | null): Block => ({
  type: 'paragraph',
  attrs: { id: `line_${id}` },
  content: [{ type: 'value', attrs: { id, source, unit: null, digits: null, shown } }],
});
