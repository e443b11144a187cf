import { readdirSync, readFileSync, rmSync } from 'node:fs';
import path from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { GET as getColumn } from '@/app/api/traces/[id]/columns/[index]/route';
import { GET as getFile } from '@/app/api/traces/[id]/file/route';
import { GET as getTrace } from '@/app/api/traces/[id]/route';
import { GET as getRows } from '@/app/api/traces/[id]/rows/route';
import { GET as getView } from '@/app/api/traces/[id]/view/route';
import { decodeView } from '@/lib/plot/view';
import type { TraceDetail } from '@/server/traces/service';
import { ingestTrace, readColumn } from '@/server/traces/service';
import { call } from './harness';
import { newEntry, sendFile, startUploads, type Uploads } from './uploads';

let lab: Uploads;
let entryId: string;
beforeAll(async () => {
  lab = await startUploads();
  entryId = await newEntry(lab);
});
afterAll(() => lab.close());

const traceOf = (sent: Awaited<ReturnType<typeof sendFile>>): string => {
  if (!sent.outcome || 'error' in sent.outcome) throw new Error(JSON.stringify(sent));
  return sent.outcome.traceId;
};
const raw = (route: typeof getView, id: string, url: string, extra: Record<string, string> = {}) =>
  route(new Request(`${lab.origin}${url}`, { headers: { cookie: lab.people.reader.cookie } }), {
    params: Promise.resolve({ id, ...extra }),
  });

describe('a received trace', () => {
  const n = 30_000;
  const text = `# made up for this test\nt / s,I / pA\n${Array.from({ length: n }, (_, i) => `${i / 100},${i === 12_345 ? 99 : (i % 7) - 3}`).join('\n')}\n`;
  let id: string;

  it('is parsed, with its columns and units', async () => {
    const sent = await sendFile(lab, lab.people.author, entryId, 'wait scan µ.csv', Buffer.from(text));
    expect(sent).toMatchObject({ status: 200, outcome: { state: 'parsed' } });
    id = traceOf(sent);
    const { body } = await call<TraceDetail>(getTrace, { as: lab.people.reader, params: { id } });
    expect(body).toMatchObject({
      fileName: 'wait scan µ.csv',
      state: 'parsed',
      rows: n,
      comments: ['# made up for this test'],
    });
    expect(body.columns.map(({ name, symbol, unit, min, max }) => [name, symbol, unit, min, max])).toEqual([
      ['t', 't', 's', 0, (n - 1) / 100],
      ['I', 'I', 'pA', -3, 99],
    ]);
    expect(body.reading?.decided).toContain('commas, decimal point');
  });

  it('gives its samples in full, in pages, and as a view of a few pixels that misses no extreme', async () => {
    const column = await raw(getColumn, id, '/c', { index: '1' });
    const samples = new Float64Array(await column.arrayBuffer());
    expect(samples).toHaveLength(n);
    expect(samples[12_345]).toBe(99);
    const rows = await call<{ total: number; rows: number[][] }>(getRows, {
      as: lab.people.reader,
      params: { id },
      url: '/r?from=29999&count=10',
    });
    expect(rows.body).toMatchObject({ total: n, rows: [[299.99, (29_999 % 7) - 3]] });
    const response = await raw(getView, id, '/v?x=0&y=1&pixels=100');
    const bytes = await response.arrayBuffer();
    expect(bytes.byteLength).toBeLessThanOrEqual(16 + 24 * 100);
    const view = decodeView(bytes);
    expect(view.kind).toBe('buckets');
    expect(Math.max(...view.max)).toBe(99);
    const near = decodeView(
      await (await raw(getView, id, '/v?x=0&y=1&pixels=100&from=123.44&to=123.46')).arrayBuffer(),
    );
    expect(near.kind).toBe('rows');
    expect(Array.from(near.min)).toContain(99);
  });

  it('gives its bytes back as they came', async () => {
    const response = await raw(getFile, id, '/f');
    expect(Buffer.from(await response.arrayBuffer()).toString()).toBe(text);
  });

  it('makes derived files again when they are lost', async () => {
    rmSync(path.join(lab.dataDir, 'columns'), { recursive: true });
    const { body } = await call<TraceDetail>(getTrace, { as: lab.people.author, params: { id } });
    expect((await readColumn(body.sha256, 1))[12_345]).toBe(99);
  });

  it('refuses a column that is not there, and an outsider', async () => {
    expect((await call(getColumn, { as: lab.people.author, params: { id, index: '7' } })).status).toBe(404);
    for (const route of [getTrace, getColumn, getView, getRows, getFile]) {
      expect(
        (await call(route, { as: lab.people.outsider, params: { id, index: '0' }, url: '/x?y=0&pixels=100' })).status,
      ).toBe(404);
      expect((await call(route, { as: null, params: { id, index: '0' }, url: '/x?y=0&pixels=100' })).status).toBe(401);
    }
  });
});

it('keeps a file that is no table, with a sentence instead of columns', async () => {
  const id = traceOf(await sendFile(lab, lab.people.author, entryId, 'notes.csv', Buffer.from('t,I\n0,1\n1\n')));
  const { body } = await call<TraceDetail>(getTrace, { as: lab.people.author, params: { id } });
  expect(body).toMatchObject({ state: 'unreadable', problem: expect.stringContaining('Line 3 has 1 column') });
  expect((await call(getRows, { as: lab.people.author, params: { id } })).body).toMatchObject({
    error: { message: expect.stringContaining('Line 3') },
  });
});

it('answers the same upload sent again with the first record', async () => {
  const bytes = Buffer.from('t,I\n0,5\n1,6\n');
  const uploadId = 'same-upload-id-0001';
  const first = traceOf(await sendFile(lab, lab.people.author, entryId, 'again.csv', bytes, { uploadId }));
  // The upload service has the file still and refuses it; the record is asked for by the upload's id.
  const { GET } = await import('@/app/api/entries/[id]/uploads/[uploadId]/route');
  expect((await call(GET, { as: lab.people.author, params: { id: entryId, uploadId } })).body).toMatchObject({
    traceId: first,
  });
  expect((await call(GET, { as: lab.people.second, params: { id: entryId, uploadId } })).status).toBe(403);
});

it('20: a parser thread that runs out of memory is a sentence on the trace, and the server lives', async () => {
  const { randomUUID } = await import('node:crypto');
  const { trace } = await import('@/server/db/schema/entries');
  const id = randomUUID();
  const bytes = Buffer.from(`t,I\n${'1,2\n'.repeat(400_000)}`);
  const { digestOf } = await import('./uploads');
  const fs = await import('node:fs/promises');
  await fs.writeFile(path.join(lab.dataDir, 'blobs', digestOf(bytes)), bytes);
  await lab.db.insert(trace).values({
    id,
    notebookId: lab.notebookId,
    entryId,
    kind: 'trace',
    fileName: 'large.csv',
    mediaType: 'text/csv',
    bytes: bytes.length,
    sha256: digestOf(bytes),
    state: 'received',
    uploadId: 'out-of-memory-0001',
    uploadedBy: lab.people.author.id,
    receivedAt: new Date(),
  });
  await ingestTrace(id, { heapMb: 2, seconds: 60 });
  const { body } = await call<TraceDetail>(getTrace, { as: lab.people.author, params: { id } });
  expect(body).toMatchObject({ state: 'unreadable', problem: expect.stringMatching(/memory|unexpectedly/) });
  expect(readdirSync(path.join(lab.dataDir, 'columns')).filter((name) => name.startsWith('.'))).toEqual([]);
  expect(readFileSync(path.join(lab.dataDir, 'blobs', digestOf(bytes)))).toHaveLength(bytes.length);
});
