import { randomUUID } from 'node:crypto';
import fs from 'node:fs';
import path from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { EntryState } from '@/lib/schemas/entry';
import { makeToken, revokeToken } from '@/server/accounts/service';
import { findPerson } from '@/server/access/person';
import { buildWorkers } from '@/server/commands/build-workers.mjs';
import { cooldown, device } from '@/server/db/schema/laboratory';
import { question } from '@/server/db/schema/signing';
import { call, startLaboratory, type Laboratory, type TestPerson } from './harness';
import * as life from './life';

/**
 * Who may call which route, in which state of the entry. The table is written by hand from the rights that the product
 * promises, not from the code that decides, so that a slip there is seen here.
 */

const callers = [
  'lead',
  'own',
  'other author',
  'contributor',
  'witness',
  'reader',
  'outsider',
  'administrator',
  'token',
  'revoked token',
  'signed out',
] as const;
type Caller = (typeof callers)[number];
const states: EntryState[] = ['draft', 'signed', 'witnessed', 'struck out'];

type Outcome = 'allowed' | 'frozen' | 'not allowed' | 'nothing here' | 'signed out';
/** Members and token that are allowed; and those whose right rests because of the entry's state. Other members are refused. */
type Row = { allowed: Caller[]; frozen?: Caller[] };

const everyMember: Caller[] = ['lead', 'own', 'other author', 'contributor', 'witness', 'reader'];
const readers: Caller[] = [...everyMember, 'token'];
const authors: Caller[] = ['lead', 'own', 'other author', 'contributor'];
const writers: Caller[] = ['own', 'contributor', 'token'];
/** Who took no part: own and contributor are never witnesses. */
const witnesses: Caller[] = ['lead', 'other author', 'witness'];
const colleagues: Caller[] = ['lead', 'own', 'other author', 'contributor', 'witness'];

const only =
  (state: EntryState, who: Caller[]) =>
  (now: EntryState): Row =>
    now === state ? { allowed: who } : { allowed: [], frozen: who };
const always = (who: Caller[]) => (): Row => ({ allowed: who });

const ofEntry: Record<string, (state: EntryState) => Row> = {
  'GET entries/[id]': always(readers),
  'GET entries/[id]/versions': always(readers),
  'GET entries/[id]/versions/[seq]': always(readers),
  'POST entries/[id]/evaluate': always(readers),
  'GET traces/[id]': always(readers),
  'GET traces/[id]/file': always(readers),
  'GET traces/[id]/rows': always(readers),
  'GET traces/[id]/view': always(readers),
  'GET traces/[id]/columns/[index]': always(readers),
  'GET pictures/[id]': always(readers),
  'GET entries/[id]/draft': only('draft', writers),
  'PUT entries/[id]/draft': only('draft', writers),
  'PUT entries/[id]': only('draft', writers),
  'POST entries/[id]/versions': only('draft', writers),
  'POST entries/[id]/versions/[seq]/restore': only('draft', writers),
  'GET entries/[id]/uploads/[uploadId]': only('draft', writers),
  'POST entries/[id]/contributors': only('draft', ['own']),
  'POST entries/[id]/strike': only('draft', ['own']),
  'POST entries/[id]/challenge': only('draft', ['own']),
  'POST entries/[id]/signature': only('draft', ['own']),
  'POST entries/[id]/witnesses': only('signed', ['own']),
  'POST entries/[id]/countersignature/challenge': only('signed', witnesses),
  'POST entries/[id]/countersignature': only('signed', witnesses),
  'POST entries/[id]/questions': only('signed', colleagues),
  'POST questions/[id]/answers': always(colleagues),
};

const ofNotebook: Record<string, Caller[]> = {
  'GET notebooks/[code]/entries': readers,
  'GET notebooks/[code]/devices': readers,
  'GET notebooks/[code]/cooldowns': readers,
  'GET notebooks/[code]/layouts': readers,
  'GET notebooks/[code]/members': readers,
  'GET devices/[id]': readers,
  'GET cooldowns/[id]': readers,
  'POST notebooks/[code]/entries': [...authors, 'token'],
  'POST notebooks/[code]/devices': authors,
  'POST notebooks/[code]/cooldowns': authors,
  'PUT devices/[id]': authors,
  'PUT cooldowns/[id]': authors,
  'POST notebooks/[code]/layouts': ['lead'],
  'PUT notebooks/[code]': ['lead'],
  'POST notebooks/[code]/members': ['lead'],
  'PUT notebooks/[code]/members/[userId]': ['lead'],
  'DELETE notebooks/[code]/members/[userId]': ['lead'],
  // The audit trail: who answers for the notebook, and who audits it.
  'GET notebooks/[code]/log': ['lead', 'reader'],
};

/** Of the signed-in person alone; a token of theirs reads, and changes nothing of the account. */
const ofPerson: Record<string, { token: boolean }> = {
  'GET find': { token: true },
  'GET notebooks': { token: true },
  'POST notebooks': { token: false },
  'PUT account/password': { token: false },
  'POST account/second-factor': { token: false },
  'PUT account/second-factor': { token: false },
  'DELETE account/second-factor': { token: false },
  'DELETE account/sessions/[sessionId]': { token: false },
  'POST account/tokens': { token: false },
  'DELETE account/tokens/[tokenId]': { token: false },
};

const ofAdministrator = [
  'PATCH administration/accounts/[accountId]',
  'POST administration/invitations',
  'DELETE administration/invitations/[invitationId]',
  'POST administration/rescue',
];

/** Open to everybody; what they do is limited by the secret in the body (tests/attacks/01-13) or the demonstration (mailbox). */
const open = [
  'POST auth/sign-in',
  'POST auth/sign-out',
  'POST auth/second-factor',
  'POST auth/forgotten',
  'POST auth/reset',
  'POST auth/join',
  'POST session/renew',
  'GET session',
  'GET mailbox',
];

/** Not wrapped: their own guards are tested in tests/attacks (30, 92) and tests/faults. */
const ownGuard = ['uploadthing', 'local-uploads/[...path]'];

type Handler = Parameters<typeof call>[0] & { action: string };
const routes = new Map<string, Handler>();
let lab: Laboratory;
const entries = {} as Record<EntryState, { id: string; traceId: string; pictureId: string; questionId: string }>;
const person = {} as Record<Exclude<Caller, 'signed out' | 'token' | 'revoked token'>, TestPerson>;
const bearer = {} as Record<'token' | 'revoked token', string>;
let deviceId: string;
let cooldownId: string;

beforeAll(async () => {
  for (const file of fs.readdirSync('app/api', { recursive: true, encoding: 'utf8' })) {
    if (!file.endsWith('route.ts')) continue;
    const folder = path.dirname(file);
    if (ownGuard.includes(folder)) continue;
    const handlers = (await import(path.resolve('app/api', file))) as Record<string, Handler>;
    for (const method of ['GET', 'HEAD', 'POST', 'PUT', 'PATCH', 'DELETE'])
      if (handlers[method]) routes.set(`${method} ${folder}`, handlers[method]);
  }
  await buildWorkers();
  lab = await startLaboratory();
  const { lead, author, second, witness, reader, outsider, administrator } = lab.people;
  const contributor = await life.newPerson(lab, 'Cora Mitt', 'author');
  Object.assign(person, {
    lead,
    own: author,
    'other author': second,
    contributor,
    witness,
    reader,
    outsider,
    administrator,
  });
  const made = await makeToken(author.id, 'kept');
  const revoked = await makeToken(author.id, 'revoked');
  const owner = await findPerson(new Headers({ cookie: author.cookie }));
  await revokeToken(owner!, revoked.id);
  Object.assign(bearer, { token: made.secret, 'revoked token': revoked.secret });
  const png = Buffer.from(
    'iVBORw0KGgoAAAANSUhEUgAAAAEAAAABCAYAAAAfFcSJAAAADUlEQVR42mNk+M9QDwADhgGAWjR9awAAAABJRU5ErkJggg==',
    'base64',
  );
  for (const state of states) {
    const id = await life.create(author);
    const traceId = await life.attach(lab, author, id, 'scan.csv', Buffer.from('t / s,I / pA\n0,1\n1,2\n'));
    const pictureId = await life.attach(lab, author, id, 'chip.png', png, 'picture');
    await life.invite(author, id, contributor);
    await life.write(author, id, `An entry that becomes ${state}.`);
    await life.cut(author, id);
    if (state === 'struck out') await life.strikeOut(author, id);
    if (state === 'signed' || state === 'witnessed') {
      const { versionDigest } = await life.sign(author, id);
      if (state === 'witnessed') expect((await life.tryCountersign(witness, id, versionDigest)).status).toBe(200);
    }
    const questionId = randomUUID();
    await lab.db.insert(question).values({
      id: questionId,
      entryId: id,
      versionDigest: '0'.repeat(64),
      text: 'Put here for the table.',
      askedBy: reader.id,
      askedAt: new Date(),
    });
    entries[state] = { id, traceId, pictureId, questionId };
  }
  deviceId = randomUUID();
  cooldownId = randomUUID();
  const place = { notebookId: lab.notebookId, createdBy: author.id };
  await lab.db.insert(device).values({ id: deviceId, name: 'GA1', ...place });
  await lab.db
    .insert(cooldown)
    .values({ id: cooldownId, name: 'Tern 1', cryostat: 'Tern', startedOn: '2031-01-01', ...place });
});
afterAll(() => lab.close());

async function outcome(route: string, caller: Caller, params: Record<string, string>): Promise<Outcome | string> {
  const [method] = route.split(' ');
  const handler = routes.get(route);
  if (!handler) return 'no such route';
  const answer = await call<Partial<life.Refusal>>(handler, {
    method,
    // Nothing in it: who may call is decided before the body is read, and an allowed call then changes nothing.
    ...(method === 'GET' || method === 'DELETE' ? {} : { body: {} }),
    params,
    url: '/api/test?q=x&y=1&pixels=100',
    as: caller in person ? person[caller as keyof typeof person] : null,
    headers: caller in bearer ? { authorization: `Bearer ${bearer[caller as keyof typeof bearer]}` } : {},
  });
  const code = answer.body.error?.code;
  if (code === 'frozen') return 'frozen';
  if (code === 'signed_out') return 'signed out';
  if (code === 'not_allowed') return 'not allowed';
  if (code === 'not_found' && answer.body.error?.message.startsWith('There is nothing here')) return 'nothing here';
  // What an allowed call with an empty body comes to: an answer, or a word about the body or the thing named in the path.
  if (answer.status === 200 || ['invalid', 'wrong_type', 'not_found', 'conflict'].includes(code ?? ''))
    return 'allowed';
  return `${answer.status} ${code}`;
}

function expected(caller: Caller, row: Row): Outcome {
  if (caller === 'signed out' || caller === 'revoked token') return 'signed out';
  if (row.allowed.includes(caller)) return 'allowed';
  if (row.frozen?.includes(caller)) return 'frozen';
  if (caller === 'outsider' || caller === 'administrator') return 'nothing here';
  return 'not allowed';
}

async function compare(route: string, row: Row, params: Record<string, string>): Promise<void> {
  const found: Record<string, string> = {};
  const wanted: Record<string, string> = {};
  for (const caller of callers) {
    found[caller] = await outcome(route, caller, params);
    wanted[caller] = expected(caller, row);
  }
  expect(found).toEqual(wanted);
}

it('every route stands in one of the tables, and every row is a route', () => {
  const named = [
    ...Object.keys(ofEntry),
    ...Object.keys(ofNotebook),
    ...Object.keys(ofPerson),
    ...ofAdministrator,
    ...open,
  ].sort();
  expect([...routes.keys()].sort()).toEqual(named);
  expect(new Set(named).size).toBe(named.length);
  for (const [name, handler] of routes) expect([name, typeof handler.action]).toEqual([name, 'string']);
});

describe('routes of an entry', () => {
  for (const state of states) {
    for (const route of Object.keys(ofEntry)) {
      it(`${state}: ${route}`, async () => {
        const { id, traceId, pictureId, questionId } = entries[state];
        const target = /traces/.test(route)
          ? traceId
          : /pictures/.test(route)
            ? pictureId
            : /questions\//.test(route)
              ? questionId
              : id;
        await compare(route, ofEntry[route](state), { id: target, seq: '1', index: '1', uploadId: 'no-such-upload' });
      });
    }
  }

  it('left the entries as they were', async () => {
    for (const state of states) expect((await life.read(person.lead, entries[state].id)).state).toBe(state);
  });
});

describe('routes of a notebook', () => {
  for (const [route, allowed] of Object.entries(ofNotebook)) {
    it(route, async () => {
      const id = route.includes('devices/[id]') ? deviceId : cooldownId;
      // The only lead, so that an allowed removal is refused by its own rule.
      await compare(route, { allowed }, { code: 'NB-01', id, userId: person.lead.id });
    });
  }
});

describe('routes of a person', () => {
  for (const [route, { token }] of Object.entries(ofPerson)) {
    it(route, async () => {
      const everybody = callers.filter((caller) => caller !== 'token' || token);
      await compare(route, { allowed: everybody }, { sessionId: 'none', tokenId: 'none' });
    });
  }
});

describe('routes of the administrator', () => {
  for (const route of ofAdministrator) {
    it(route, async () => {
      const params = { accountId: 'nobody', invitationId: 'none' };
      for (const caller of callers) {
        const wanted: Outcome =
          caller === 'administrator'
            ? 'allowed'
            : caller === 'signed out' || caller === 'revoked token'
              ? 'signed out'
              : caller === 'token'
                ? 'not allowed'
                : 'nothing here';
        expect([caller, await outcome(route, caller, params)]).toEqual([caller, wanted]);
      }
    });
  }

  it('an administrator’s token administers nothing', async () => {
    const { secret } = await makeToken(person.administrator.id, 'script');
    const answer = await call(routes.get('POST administration/invitations')!, {
      body: { email: 'x@laboratory.example', name: 'Xenia Xy', role: 'administrator' },
      headers: { authorization: `Bearer ${secret}` },
    });
    expect(answer.status).toBe(403);
  });
});

describe('open routes', () => {
  for (const route of open.filter((name) => name !== 'POST auth/sign-out')) {
    it(`${route} asks for no session`, async () => {
      expect(['signed out', 'not allowed']).not.toContain(await outcome(route, 'signed out', {}));
    });
  }
});

describe('what an outsider is told', () => {
  it('is the same for what exists and for what does not', async () => {
    for (const [route, handler] of routes) {
      if (!(route in ofEntry) && !(route in ofNotebook)) continue;
      const [method] = route.split(' ');
      const ask = (params: Record<string, string>) =>
        call(handler, { method, ...(method === 'GET' ? {} : { body: {} }), params, as: person.outsider });
      const { id, traceId, pictureId, questionId } = entries.signed;
      const real = route.includes('traces')
        ? traceId
        : route.includes('pictures')
          ? pictureId
          : route.includes('questions/')
            ? questionId
            : route.includes('devices/')
              ? deviceId
              : route.includes('cooldowns/')
                ? cooldownId
                : id;
      const exists = await ask({ code: 'NB-01', id: real, seq: '1', index: '0', userId: 'x' });
      const not = await ask({ code: 'NB-99', id: randomUUID(), seq: '1', index: '0', userId: 'x' });
      expect([route, exists.status, exists.body]).toEqual([route, 404, not.body]);
    }
  });
});
