import { randomUUID } from 'node:crypto';
import { and, eq } from 'drizzle-orm';
import { afterAll, beforeAll, beforeEach, describe, expect, it } from 'vitest';
import { GET as draftRoute, PUT as putDraft } from '@/app/api/entries/[id]/draft/route';
import { POST as evaluateRoute } from '@/app/api/entries/[id]/evaluate/route';
import { GET as getEntry, PUT as putFacts } from '@/app/api/entries/[id]/route';
import { POST as signRoute } from '@/app/api/entries/[id]/signature/route';
import { GET as uploadRoute } from '@/app/api/entries/[id]/uploads/[uploadId]/route';
import { GET as findRoute } from '@/app/api/find/route';
import { GET as entriesRoute, POST as createRoute } from '@/app/api/notebooks/[code]/entries/route';
import { GET as logRoute } from '@/app/api/notebooks/[code]/log/route';
import { POST as layoutRoute } from '@/app/api/notebooks/[code]/layouts/route';
import { DELETE as removeMember, PUT as putMember } from '@/app/api/notebooks/[code]/members/[userId]/route';
import { GET as notebooksRoute, POST as foundRoute } from '@/app/api/notebooks/route';
import { POST as joinRoute } from '@/app/api/auth/join/route';
import { GET as fileRoute } from '@/app/api/traces/[id]/file/route';
import { GET as traceRoute } from '@/app/api/traces/[id]/route';
import { DELETE as revokeRoute } from '@/app/api/account/tokens/[tokenId]/route';
import { POST as tokenRoute } from '@/app/api/account/tokens/route';
import { makeToken } from '@/server/accounts/service';
import { entry } from '@/server/db/schema/entries';
import { cooldown } from '@/server/db/schema/laboratory';
import { notebookMember } from '@/server/db/schema/notebooks';
import { user } from '@/server/db/schema/people';
import { call } from '../integration/harness';
import * as life from '../integration/life';
import { digestOf, newEntry, sendFile, startUploads, type Uploads } from '../integration/uploads';

/** NB-02 belongs to the outsider of NB-01, and the other way about. */
let lab: Uploads;
let mine: string;
let mineTrace: string;
beforeAll(async () => {
  lab = await startUploads();
  // The harness's calls come from its own address; the upload routes answer at theirs.
  process.env.BASE_URL = 'http://localhost:3999';
  const { forgetEnv } = await import('@/server/env/env');
  forgetEnv();
  life.accepted(
    await call(foundRoute, { as: lab.people.outsider, body: { code: 'NB-02', title: 'Ratchets', description: '' } }),
  );
  mine = await life.create(lab.people.author, { title: 'Hushed plateau' });
  mineTrace = await life.attach(lab, lab.people.author, mine, 'scan.csv', Buffer.from('t / s,I / pA\n0,1\n1,2\n'));
  await life.write(lab.people.author, mine, 'Whispered words of NB-01.');
});
afterAll(() => lab.close());
beforeEach(() => life.forgetTurns(lab));

const outside = () => lab.people.outsider;

describe('20 another notebook’s', () => {
  it('20 entry, trace and file are not found by id, and no search or list shows them', async () => {
    for (const [route, params] of [
      [getEntry, { id: mine }],
      [draftRoute, { id: mine }],
      [traceRoute, { id: mineTrace }],
      [fileRoute, { id: mineTrace }],
      [entriesRoute, { code: 'NB-01' }],
      [logRoute, { code: 'NB-01' }],
    ] as const)
      expect((await call(route, { as: outside(), params })).status).toBe(404);
    const found = await call(findRoute, { as: outside(), url: '/api/find?q=whispered' });
    expect(found.body).toEqual({ results: [] });
    const own = await call<{ results: unknown[] }>(findRoute, { as: lab.people.reader, url: '/api/find?q=whispered' });
    expect(own.body.results).toHaveLength(1);
    const listed = await call(notebooksRoute, { as: outside() });
    expect(JSON.stringify(listed.body)).not.toContain('NB-01');
  });

  it('20 trace gives no numbers to an entry of one’s own that names it', async () => {
    const theirs = await life.create(outside(), { code: 'NB-02' });
    const node = life.traceBlock(mineTrace).attrs as Record<string, unknown>;
    const answer = await call<{ results: { state: string; value: number | null }[] }>(evaluateRoute, {
      as: outside(),
      params: { id: theirs },
      body: {
        cells: [{ id: 'value_1', source: 'x = mean(t1.I)', unit: null, digits: null }],
        traces: [{ traceId: mineTrace, handle: 't1', settings: node.settings, spans: [] }],
      },
    });
    expect(answer.status).toBe(200);
    expect(answer.body.results[0].state).not.toBe('ok');
    expect(answer.body.results[0].value).toBeNull();
  });

  it('20 cooldowns, devices and layouts cannot be drawn into an entry of one’s own', async () => {
    const cooldownId = randomUUID();
    await lab.db.insert(cooldown).values({
      id: cooldownId,
      notebookId: lab.notebookId,
      name: 'Brine 3',
      cryostat: 'Brine',
      startedOn: '2031-01-01',
      createdBy: lab.people.lead.id,
    });
    const layout = life.accepted(
      await call<{ id: string }>(layoutRoute, {
        as: lab.people.lead,
        params: { code: 'NB-01' },
        body: { entryId: mine, name: 'Ours' },
      }),
    );
    const body = { title: 'x', workDate: '2031-03-04', cooldownId: null, deviceIds: [], layout: 'empty' };
    for (const stolen of [{ cooldownId }, { deviceIds: [randomUUID()] }, { layout: layout.id }]) {
      const refused = await call(createRoute, {
        as: outside(),
        params: { code: 'NB-02' },
        body: { ...body, ...stolen, requestKey: randomUUID() },
      });
      expect(refused.status).toBe(422);
    }
    const theirs = await life.create(outside(), { code: 'NB-02' });
    const facts = { workDate: '2031-03-04', cooldownId, deviceIds: [] };
    const moved = await call(putFacts, { as: outside(), params: { id: theirs }, method: 'PUT', body: facts });
    expect(moved.status).toBe(422);
  });
});

describe('21 what is not the caller’s to set', () => {
  it('21 role, author, leaf, state and times in a body are refused', async () => {
    const { author } = lab.people;
    const body = { title: 'x', workDate: '2031-03-04', cooldownId: null, deviceIds: [], layout: 'empty' };
    for (const extra of [
      { authorId: lab.people.lead.id },
      { leaf: 1 },
      { state: 'signed' },
      { createdAt: '2001-01-01T00:00:00Z' },
      { notebookId: randomUUID() },
    ]) {
      const made = await call(createRoute, {
        as: author,
        params: { code: 'NB-01' },
        body: { ...body, requestKey: randomUUID(), ...extra },
      });
      expect([Object.keys(extra), made.status]).toEqual([Object.keys(extra), 422]);
    }
    const draft = await life.draftOf(author, mine);
    for (const extra of [{ savedBy: lab.people.lead.id }, { savedAt: '2001-01-01T00:00:00Z' }, { stamps: {} }]) {
      const saved = await call(putDraft, {
        as: author,
        params: { id: mine },
        method: 'PUT',
        body: { ...life.saveBody(draft.revision, []), ...extra },
      });
      expect(saved.status).toBe(422);
    }
    const joined = await call(joinRoute, {
      body: { token: 'x', name: 'Nils Ny', password: 'long enough for it', role: 'administrator' },
    });
    expect(joined.status).toBe(422);
    const signed = await call(signRoute, {
      as: author,
      params: { id: mine },
      body: life.signBody(randomUUID(), '0'.repeat(64), { signerId: lab.people.lead.id }),
    });
    expect(signed.status).toBe(422);
  });
});

it('23 a member who was removed with the page open reads and writes nothing more, and neither does one made reader', async () => {
  const { lead } = lab.people;
  const person = await life.newPerson(lab, 'Remy Fjern', 'author');
  const id = await life.create(person);
  const revision = await life.write(person, id, 'Before.');
  const save = () =>
    call<life.Refusal>(putDraft, {
      as: person,
      params: { id },
      method: 'PUT',
      body: life.saveBody(revision, [life.paragraph('block-one', 'After.')]),
    });
  const params = { code: 'NB-01', userId: person.id };
  await call(putMember, { as: lead, method: 'PUT', params, body: { role: 'reader' } });
  expect((await save()).status).toBe(403);
  await call(removeMember, { as: lead, method: 'DELETE', params });
  expect((await save()).status).toBe(404);
  expect((await call(getEntry, { as: person, params: { id } })).status).toBe(404);
  expect(JSON.stringify((await life.read(lead, id)).author.name)).toContain('Remy Fjern');
});

it('24 a reader and a witness calling a writer’s action are refused and nothing is written', async () => {
  for (const as of [lab.people.reader, lab.people.witness]) {
    const refused = await call<life.Refusal>(putDraft, {
      as,
      params: { id: mine },
      method: 'PUT',
      body: life.saveBody(2, [life.paragraph('block-one', 'Forged.')]),
    });
    expect(refused).toMatchObject({ status: 403, body: { error: { code: 'not_allowed' } } });
  }
  expect(JSON.stringify((await life.draftOf(lab.people.author, mine)).doc)).not.toContain('Forged');
});

it('25 the audit trail opens for lead and reader only', async () => {
  const statuses: Record<string, number> = {};
  for (const [name, as] of Object.entries(lab.people))
    statuses[name] = (await call(logRoute, { as, params: { code: 'NB-01' } })).status;
  expect(statuses).toEqual({
    lead: 200,
    author: 403,
    second: 403,
    witness: 403,
    reader: 200,
    outsider: 404,
    administrator: 404,
  });
});

it('26 what exists elsewhere and what exists nowhere are answered with the same bytes', async () => {
  const ask = (route: Parameters<typeof call>[0], params: Record<string, string>) =>
    call(route, { as: outside(), params });
  for (const [route, real, invented] of [
    [getEntry, { id: mine }, { id: randomUUID() }],
    [traceRoute, { id: mineTrace }, { id: randomUUID() }],
    [entriesRoute, { code: 'NB-01' }, { code: 'NB-77' }],
    [getEntry, { id: mine }, { id: 'not-an-id' }],
    [getEntry, { id: mine }, { id: `${mine}' OR '1'='1` }],
  ] as const) {
    const [a, b] = [await ask(route, real), await ask(route, invented)];
    expect([a.status, a.body]).toEqual([b.status, b.body]);
    expect(a.status).toBe(404);
  }
});

it('27 an entry does not move to another notebook, by the API or in the database', async () => {
  const { author } = lab.people;
  for (const extra of [{ notebookId: randomUUID() }, { notebook: 'NB-02' }]) {
    const moved = await call(putFacts, {
      as: author,
      params: { id: mine },
      method: 'PUT',
      body: { workDate: '2031-03-04', cooldownId: null, deviceIds: [], ...extra },
    });
    expect(moved.status).toBe(422);
  }
  const theirs = await life.create(outside(), { code: 'NB-02' });
  const [row] = await lab.db.select().from(entry).where(eq(entry.id, theirs));
  const moving = lab.db.update(entry).set({ notebookId: row.notebookId }).where(eq(entry.id, mine));
  await expect(moving).rejects.toMatchObject({ cause: { code: 'KL001' } });
});

it('28 no answer with somebody’s data may be kept by a cache that others share', async () => {
  const { author } = lab.people;
  for (const [route, params] of [
    [getEntry, { id: mine }],
    [draftRoute, { id: mine }],
    [notebooksRoute, {}],
    [traceRoute, { id: mineTrace }],
    [fileRoute, { id: mineTrace }],
  ] as const) {
    const answer = await call(route, { as: author, params });
    expect(answer.headers.get('cache-control')).toMatch(/no-store/);
  }
});

it('29 a revoked token opens nothing, and nobody revokes another’s', async () => {
  const { author, second } = lab.people;
  const made = life.accepted(
    await call<{ id: string; secret: string }>(tokenRoute, { as: author, body: { label: 'cryostat' } }),
  );
  const use = async () =>
    (await call(getEntry, { params: { id: mine }, headers: { authorization: `Bearer ${made.secret}` } })).status;
  expect(await use()).toBe(200);
  await call(revokeRoute, { as: second, method: 'DELETE', params: { tokenId: made.id } });
  expect(await use()).toBe(200);
  await call(revokeRoute, { as: author, method: 'DELETE', params: { tokenId: made.id } });
  expect(await use()).toBe(401);
  for (const scheme of ['bearer', 'Basic', 'Bearer  ', 'Token']) {
    const answer = await call(getEntry, {
      params: { id: mine },
      headers: { authorization: `${scheme} ${made.secret}` },
    });
    expect(answer.status).toBe(401);
  }
});

it('29 a token follows its person out of the notebook', async () => {
  const person = await life.newPerson(lab, 'Tor Gaar', 'author');
  const { secret } = await makeToken(person.id, 'x');
  const use = async () =>
    (await call(getEntry, { params: { id: mine }, headers: { authorization: `Bearer ${secret}` } })).status;
  expect(await use()).toBe(200);
  await lab.db
    .delete(notebookMember)
    .where(and(eq(notebookMember.userId, person.id), eq(notebookMember.notebookId, lab.notebookId)));
  expect(await use()).toBe(404);
  await lab.db.update(user).set({ disabledAt: new Date() }).where(eq(user.id, person.id));
  expect(await use()).toBe(401);
});

it('30 an upload’s id means nothing to anybody but who sent it', async () => {
  const { author, second, reader } = lab.people;
  const { forgetEnv } = await import('@/server/env/env');
  const bytes = Buffer.from('t / s,I / pA\n0,7\n1,8\n');
  const uploadId = 'shared-upload-id-01';
  process.env.BASE_URL = lab.origin;
  forgetEnv();
  try {
    const sent = await sendFile(lab, author, mine, 'mine.csv', bytes, { uploadId });
    expect(sent.status).toBe(200);
    // A colleague who may not write in this entry, a reader, an outsider, nobody.
    for (const as of [second, reader, outside(), null]) {
      const refused = await sendFile(lab, as, mine, 'mine.csv', bytes, { uploadId, sha256: digestOf(bytes) });
      expect([403, 404]).toContain(refused.status);
    }
    // The same id for an own entry opens no file of somebody else's: other bytes are another upload.
    const own = await newEntry(lab, second);
    const other = Buffer.from('t / s,I / pA\n0,1\n1,1\n');
    const theirs = await sendFile(lab, second, own, 'theirs.csv', other, { uploadId });
    expect(theirs.status).toBe(200);
    const [a, b] = [sent.outcome, theirs.outcome] as { traceId: string }[];
    expect(a.traceId).not.toBe(b.traceId);
  } finally {
    process.env.BASE_URL = 'http://localhost:3999';
    forgetEnv();
  }
  const invited = await life.invite(author, mine, second);
  expect(invited).toBeUndefined();
  expect((await call(uploadRoute, { as: second, params: { id: mine, uploadId } })).status).toBe(404);
  expect((await call(uploadRoute, { as: author, params: { id: mine, uploadId } })).status).toBe(200);
});
