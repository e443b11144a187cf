import { randomUUID } from 'node:crypto';
import { readlinkSync } from 'node:fs';
import fs from 'node:fs/promises';
import path from 'node:path';
import { eq } from 'drizzle-orm';
import { afterAll, beforeAll, beforeEach, expect, it, vi } from 'vitest';
import { PUT as putDraft } from '@/app/api/entries/[id]/draft/route';
import { POST as questionRoute } from '@/app/api/entries/[id]/questions/route';
import { POST as signRoute } from '@/app/api/entries/[id]/signature/route';
import { POST as createRoute } from '@/app/api/notebooks/[code]/entries/route';
import { buildWorkers } from '@/server/commands/build-workers.mjs';
import { openDatabase } from '@/server/db/client';
import { entry, trace, traceColumn } from '@/server/db/schema/entries';
import { job, logRecord } from '@/server/db/schema/housekeeping';
import { question, signature } from '@/server/db/schema/signing';
import { enqueueJob, releaseLeases, runOneJob } from '@/server/jobs/service';
import { jobHandlers } from '@/server/start/handlers';
import { settleTraces } from '@/server/traces/service';
import { call, startLaboratory, type Laboratory } from '../integration/harness';
import * as life from '../integration/life';

let lab: Laboratory;
beforeAll(async () => {
  await buildWorkers();
  lab = await startLaboratory({ DATABASE_URL: '' });
});
afterAll(() => lab.close());
beforeEach(() => life.forgetTurns(lab));

it('2 the reply lost after commit: the retry makes no second entry, revision, question or signature', async () => {
  const { author, witness } = lab.people;
  const body = { title: 'Once', workDate: life.today(), cooldownId: null, deviceIds: [], layout: 'empty' };
  const requestKey = randomUUID();
  const create = (as = author) =>
    call<{ id: string; leaf: number }>(createRoute, { as, params: { code: 'NB-01' }, body: { ...body, requestKey } });
  const first = await create();
  expect((await create()).body).toEqual(first.body);
  // Twice at once, as a browser that gave up waiting and tried again.
  const otherKey = randomUUID();
  const both = await Promise.all(
    [0, 1].map(() =>
      call<{ id: string }>(createRoute, {
        as: author,
        params: { code: 'NB-01' },
        body: { ...body, requestKey: otherKey },
      }),
    ),
  );
  expect(new Set(both.map((answer) => answer.body.id)).size).toBe(1);
  expect((await create(lab.people.second)).status).toBe(409);
  const { id } = first.body;

  const save = life.saveBody(1, [life.paragraph('block-one', 'Saved once.')]);
  const put = () => call<{ revision: number }>(putDraft, { as: author, params: { id }, method: 'PUT', body: save });
  const saved = await put();
  expect(await put()).toMatchObject({ status: 200, body: saved.body });
  expect((await life.draftOf(author, id)).revision).toBe(2);

  const { digest } = await life.cut(author, id);
  expect((await life.cut(author, id)).digest).toBe(digest);
  const sign = life.signBody(await life.challenge(author, id, digest), digest);
  const signed = await call(signRoute, { as: author, params: { id }, body: sign });
  expect(signed.status).toBe(200);
  const again = await call<life.Refusal>(signRoute, { as: author, params: { id }, body: sign });
  expect(again.status).toBe(409);
  expect(await lab.db.select().from(signature).where(eq(signature.entryId, id))).toHaveLength(1);

  const asked = { versionDigest: digest, blockId: null, quote: '', text: 'Why?', requestKey: randomUUID() };
  const ask = () => call<{ id: string }>(questionRoute, { as: witness, params: { id }, body: asked });
  expect((await ask()).body.id).toBe((await ask()).body.id);
  expect(await lab.db.select().from(question).where(eq(question.entryId, id))).toHaveLength(1);
  const told = (await lab.db.select().from(logRecord).where(eq(logRecord.entryId, id))).map((row) => row.kind);
  expect(told).toEqual(['entry created', 'version', 'signature', 'question']);
});

it('11 a crash between file and record: what no record names is swept at the next start, what one names stays', async () => {
  const { author } = lab.people;
  const id = await life.create(author);
  const traceId = await life.attach(lab, author, id, 'kept.csv', Buffer.from('t,I\n0,1\n1,3\n'));
  const [row] = await lab.db.select().from(trace).where(eq(trace.id, traceId));
  const blobs = path.join(lab.dataDir, 'blobs');
  const longAgo = new Date(Date.now() - 7_200_000);
  const put = async (name: string, old: boolean) => {
    await fs.writeFile(path.join(blobs, name), 'left behind');
    if (old) await fs.utimes(path.join(blobs, name), longAgo, longAgo);
  };
  await put('a'.repeat(64), true);
  await put('.0123456789abcdef01.new', true);
  await put('b'.repeat(64), false);
  await fs.utimes(path.join(blobs, row.sha256), longAgo, longAgo);
  expect((await settleTraces()).swept).toBe(2);
  // The young one may belong to an upload that is just being recorded.
  expect((await fs.readdir(blobs)).sort()).toEqual([row.sha256, 'b'.repeat(64)].sort());
});

it('11 a file that was recorded and not yet read is read at the next start', async () => {
  const { author } = lab.people;
  const id = await life.create(author);
  const traceId = await life.attach(lab, author, id, 'later.csv', Buffer.from('t,I\n0,1\n1,4\n'));
  await lab.db.update(trace).set({ state: 'received', rows: 0 }).where(eq(trace.id, traceId));
  await lab.db.delete(traceColumn).where(eq(traceColumn.traceId, traceId));
  expect((await settleTraces()).read).toBe(1);
  const [row] = await lab.db.select().from(trace).where(eq(trace.id, traceId));
  expect([row.state, Number(row.rows)]).toEqual(['parsed', 2]);
});

it('12 the journal is flushed before a save is answered, a file and its folder before its record, and every file of a copy', async () => {
  const flushed: string[] = [];
  const probe = await fs.open(lab.dataDir, 'r');
  const prototype = Object.getPrototypeOf(probe) as { sync: () => Promise<void>; datasync: () => Promise<void> };
  await probe.close();
  const note = (handle: { fd: number }) =>
    flushed.push(path.relative(lab.dataDir, readlinkSync(`/proc/self/fd/${handle.fd}`)));
  const real = { sync: prototype.sync, datasync: prototype.datasync };
  const spies = (['sync', 'datasync'] as const).map((name) =>
    vi.spyOn(prototype, name).mockImplementation(async function (this: { fd: number }) {
      await real[name].call(this as never);
      note(this);
    }),
  );
  try {
    const { author } = lab.people;
    const id = await life.create(author);
    const draft = await life.draftOf(author, id);
    flushed.length = 0;
    const answer = await call(putDraft, {
      as: author,
      params: { id },
      method: 'PUT',
      body: life.saveBody(draft.revision, [life.paragraph('block-one', 'On the disk.')]),
    });
    expect(answer.status).toBe(200);
    expect(flushed).toContainEqual(expect.stringMatching(/^journal\/\d{12}\.journal$/));
    const [segment] = flushed.filter((name) => name.startsWith('journal/'));
    expect(await fs.readFile(path.join(lab.dataDir, segment), 'utf8')).toContain('On the disk.');

    flushed.length = 0;
    await life.attach(lab, author, id, 'flushed.csv', Buffer.from('t,I\n0,9\n1,9\n'));
    const file = flushed.findIndex((name) => /^blobs\/\.[0-9a-f]+\.new$/.test(name));
    const folder = flushed.indexOf('blobs');
    const record = flushed.findIndex((name) => name.startsWith('journal/'));
    expect([file >= 0, file < folder, folder < record]).toEqual([true, true, true]);

    flushed.length = 0;
    await (await openDatabase()).maintain();
    const [copy] = await fs.readdir(path.join(lab.dataDir, 'copies'));
    const files = (await fs.readdir(path.join(lab.dataDir, 'copies', copy), { recursive: true, withFileTypes: true }))
      .filter((item) => item.isFile())
      .map((item) => path.relative(path.join(lab.dataDir, 'copies', copy), path.join(item.parentPath, item.name)));
    expect(files.length).toBeGreaterThan(500);
    const seen = new Set(flushed);
    expect(files.filter((name) => !seen.has(`copies/${copy}.part/${name}`))).toEqual([]);
    expect(seen.has('copies')).toBe(true);
  } finally {
    for (const spy of spies) spy.mockRestore();
  }
});

it('17 a job whose worker was killed is done again, and its effect is there once', async () => {
  const { author } = lab.people;
  const id = await life.create(author);
  const traceId = await life.attach(lab, author, id, 'again.csv', Buffer.from('t,I\n0,1\n1,5\n2,6\n'));
  const [queued] = await lab.db
    .select()
    .from(job)
    .where(eq(job.key, `ingest trace ${traceId}`));
  const drain = async () => {
    let ran = 0;
    while (await runOneJob(jobHandlers)) ran += 1;
    return ran;
  };
  await drain();
  // Killed after the effect, before the job was marked as done; and killed before it.
  for (const effectLost of [false, true]) {
    if (effectLost) {
      await lab.db.update(trace).set({ state: 'received', rows: 0 }).where(eq(trace.id, traceId));
      await lab.db.delete(traceColumn).where(eq(traceColumn.traceId, traceId));
    }
    const held = { state: 'running' as const, leaseUntil: new Date(Date.now() + 600_000) };
    await lab.db.update(job).set(held).where(eq(job.id, queued.id));
    expect(await drain()).toBe(0);
    await releaseLeases();
    expect(await drain()).toBe(1);
    const [row] = await lab.db.select().from(trace).where(eq(trace.id, traceId));
    expect([row.state, Number(row.rows)]).toEqual(['parsed', 3]);
    expect(await lab.db.select().from(traceColumn).where(eq(traceColumn.traceId, traceId))).toHaveLength(2);
    const received = (await lab.db.select().from(logRecord).where(eq(logRecord.entryId, id))).filter(
      (line) => line.kind === 'trace received',
    );
    expect(received).toHaveLength(1);
  }
});

it('17 a lease that ran out is taken over, and a job that keeps failing is kept with its problem', async () => {
  const done: string[] = [];
  let failing = true;
  const handlers = {
    trial: async () => {
      if (failing) throw new Error('not today');
      done.push('trial');
    },
  };
  vi.spyOn(process.stderr, 'write').mockImplementation(() => true);
  await lab.db.transaction((tx) => enqueueJob(tx, 'trial', 'trial-1', {}));
  await lab.db
    .update(job)
    .set({ state: 'running', leaseUntil: new Date(Date.now() - 1) })
    .where(eq(job.key, 'trial-1'));
  expect(await runOneJob(handlers)).toBe(true);
  const read = async () => (await lab.db.select().from(job).where(eq(job.key, 'trial-1')))[0];
  expect(await read()).toMatchObject({ state: 'waiting', problem: 'not today' });
  for (let i = 0; i < 4; i += 1) {
    await lab.db.update(job).set({ runAfter: new Date() }).where(eq(job.key, 'trial-1'));
    await runOneJob(handlers);
  }
  expect(await read()).toMatchObject({ state: 'failed', attempts: 5 });
  failing = false;
  await lab.db.transaction((tx) => enqueueJob(tx, 'trial', 'trial-1', {}));
  expect(await runOneJob(handlers)).toBe(true);
  expect(done).toEqual(['trial']);
  vi.restoreAllMocks();
});

it('leaf numbers have no gap after refused and repeated requests', async () => {
  const leaves = (await lab.db.select({ leaf: entry.leaf }).from(entry)).map((row) => row.leaf).sort((a, b) => a - b);
  expect(leaves).toEqual(leaves.map((_, index) => index + 1));
});
