import { afterAll, beforeAll, expect, it } from 'vitest';
import { POST as evaluateRoute } from '@/app/api/entries/[id]/evaluate/route';
import { POST as cutRoute } from '@/app/api/entries/[id]/versions/route';
import { GET as versionRoute } from '@/app/api/entries/[id]/versions/[seq]/route';
import { readRecord } from '@/lib/document/version';
import type { VersionContentDto, VersionDto } from '@/lib/schemas/entry';
import { engineVersion } from '@/lib/expression/engine';
import { buildWorkers } from '@/server/commands/build-workers.mjs';
import { entryVersion } from '@/server/db/schema/entries';
import { eq } from 'drizzle-orm';
import { call, startLaboratory, type Laboratory } from './harness';
import * as life from './life';

let lab: Laboratory;
let id: string;
let traceId: string;
beforeAll(async () => {
  await buildWorkers();
  lab = await startLaboratory();
  id = await life.create(lab.people.author);
  // Invented: the mean of 2, 4, 4, 4, 5, 5, 7, 9 is 5.
  const samples = [2, 4, 4, 4, 5, 5, 7, 9].map((current, i) => `${i},${current}`).join('\n');
  traceId = await life.attach(lab, lab.people.author, id, 'scan.csv', Buffer.from(`t / s,I / pA\n${samples}\n`));
});
afterAll(() => lab.close());

type Cut = VersionDto & life.Refusal;
async function cutWith(cells: [string, string, string | null][]) {
  const blocks = cells.map(([valueId, source, shown]) => life.valueLine(valueId, source, shown));
  const revision = await life.write(lab.people.author, id, [life.traceBlock(traceId), ...blocks]);
  return call<Cut>(cutRoute, { as: lab.people.author, params: { id }, body: { basedOn: revision, reason: null } });
}
async function texts(sources: string[]): Promise<Record<string, string>> {
  const node = life.traceBlock(traceId).attrs as Record<string, unknown>;
  const { body } = await call<{ results: { id: string; text: string }[] }>(evaluateRoute, {
    as: lab.people.author,
    params: { id },
    body: {
      cells: sources.map((source, i) => ({ id: `value_${i}`, source, unit: null, digits: null })),
      traces: [{ traceId, handle: 't1', settings: node.settings, spans: [] }],
    },
  });
  return Object.fromEntries(body.results.map((result) => [result.id, result.text]));
}

it('the server evaluates every value again from the stored samples, and binds its own results', async () => {
  const made = await cutWith([
    ['value_f', 'f = 200 kHz exactly', null],
    ['value_n', 'n = 2*21', null],
    ['value_i', 'I_on = mean(t1.I)', null],
  ]);
  expect(made.status).toBe(200);
  const [row] = await lab.db.select().from(entryVersion).where(eq(entryVersion.digest, made.body.digest));
  const record = readRecord(row.canonical);
  expect(record.engine).toBe(engineVersion);
  const bound = Object.fromEntries(record.values.map((value) => [value.id, value]));
  expect(bound.value_f).toMatchObject({ symbol: 'f', state: 'ok', error: null });
  // Numbers are bound as decimal text. 200 kHz exactly, 42, and the arithmetic mean of the samples.
  expect(Number(bound.value_n.value)).toBe(42);
  expect([Number(bound.value_i.value), bound.value_i.unit]).toEqual(
    bound.value_i.unit === 'pA' ? [5, 'pA'] : [expect.closeTo(5e-12, 24), 'A'],
  );
  expect(record.traces).toMatchObject([{ handle: 't1', traceId, fileName: 'scan.csv', rows: 8 }]);
});

it('a document whose shown digits differ is refused, with both numbers, and no version is cut', async () => {
  const before = (await life.read(lab.people.author, id)).head?.seq;
  const refused = await cutWith([
    ['value_f', 'f = 200 kHz exactly', null],
    ['value_x', 'P_esc = mean(t1.I)/(5 pA)', '1.0000(1)'],
  ]);
  expect(refused.status).toBe(422);
  const { details, message } = refused.body.error;
  expect(message).toMatch(
    /^The page shows P_esc = 1\.0000\(1\), and the server calculates .+ No version was cut; the draft is kept\./,
  );
  const [differing] = details?.differing as { id: string; shown: string; computed: string }[];
  expect(differing).toMatchObject({ id: 'value_x', shown: '1.0000(1)' });
  expect(differing.computed).not.toBe('1.0000(1)');
  expect((await life.read(lab.people.author, id)).head?.seq).toBe(before);
  // The draft is kept, and cuts as soon as it shows what the server calculates.
  const good = await cutWith([['value_x', 'P_esc = mean(t1.I)/(5 pA)', differing.computed]]);
  expect(good.status).toBe(200);
});

it('the digits that the server itself showed are accepted, and are what a reader is shown later', async () => {
  const sources = ['f = 200 kHz exactly', 'I_on = mean(t1.I)', 'Q = I_on/f'];
  const shown = await texts(sources);
  const made = await cutWith(sources.map((source, i) => [`value_${i}`, source, shown[`value_${i}`]]));
  expect(made.status).toBe(200);
  const version = await call<VersionContentDto>(versionRoute, {
    as: lab.people.reader,
    params: { id, seq: String(made.body.seq) },
  });
  expect(version.body.values.map((value) => value.text)).toEqual(sources.map((_, i) => shown[`value_${i}`]));
});

it('a value in error may be signed with its error, but never with a number shown in its place', async () => {
  const honest = await cutWith([['value_e', 'x = 1/0', null]]);
  expect(honest.status).toBe(200);
  const [row] = await lab.db.select().from(entryVersion).where(eq(entryVersion.digest, honest.body.digest));
  const [value] = readRecord(row.canonical).values;
  expect(value).toMatchObject({ state: 'error', value: null, text: null });
  expect(value.error).toMatch(/\w/);
  expect((await cutWith([['value_e', 'x = 1/0', '3.14']])).status).toBe(422);
});

it('a result sent along in the document is refused as unknown', async () => {
  const draft = await life.draftOf(lab.people.author, id);
  const line = life.valueLine('value_r', 'x = 1', null);
  const node = (line.content as { attrs: Record<string, unknown> }[])[0];
  node.attrs.result = { value: 2 };
  const { PUT } = await import('@/app/api/entries/[id]/draft/route');
  const refused = await call(PUT, {
    as: lab.people.author,
    params: { id },
    method: 'PUT',
    body: life.saveBody(draft.revision, [line]),
  });
  expect(refused.status).toBe(422);
});
