import { randomUUID } from 'node:crypto';
import { afterAll, beforeAll, expect, it } from 'vitest';
import { GET as getDraft, PUT as putDraft } from '@/app/api/entries/[id]/draft/route';
import { POST as createEntry } from '@/app/api/notebooks/[code]/entries/route';
import type { DraftDto } from '@/lib/schemas/entry';
import { call, startLaboratory, type Laboratory } from './harness';

let laboratory: Laboratory;
beforeAll(async () => {
  laboratory = await startLaboratory();
});
afterAll(() => laboratory.close());

const newEntry = (title: string) => ({
  title,
  workDate: '2031-03-04',
  cooldownId: null,
  deviceIds: [],
  layout: 'cooldown-day',
  requestKey: randomUUID(),
});

it('gives leaf numbers in order and one entry for a repeated request', async () => {
  const { author } = laboratory.people;
  const body = newEntry('First day');
  const first = await call<{ id: string; leaf: number }>(createEntry, { as: author, params: { code: 'NB-01' }, body });
  const again = await call<{ id: string; leaf: number }>(createEntry, { as: author, params: { code: 'NB-01' }, body });
  const second = await call<{ leaf: number }>(createEntry, {
    as: author,
    params: { code: 'NB-01' },
    body: newEntry('Second'),
  });
  expect(first.status).toBe(200);
  expect(again.body).toEqual(first.body);
  expect(second.body.leaf).toBe(first.body.leaf + 1);
});

it('keeps both texts apart when a save is based on an older revision', async () => {
  const { author } = laboratory.people;
  const { body: made } = await call<{ id: string }>(createEntry, {
    as: author,
    params: { code: 'NB-01' },
    body: newEntry('Draft'),
  });
  const params = { id: made.id };
  const { body: draft } = await call<DraftDto>(getDraft, { as: author, params });
  const save = (basedOn: number, text: string) =>
    call(putDraft, {
      as: author,
      params,
      method: 'PUT',
      body: {
        basedOn,
        title: 'Draft',
        doc: {
          type: 'doc',
          content: [{ type: 'paragraph', attrs: { id: 'block-one' }, content: [{ type: 'text', text }] }],
        },
        written: { 'block-one': '2031-03-04T09:00:00+01:00' },
        clockOffsetMs: 0,
        saveId: randomUUID(),
      },
    });
  const good = await save(draft.revision, 'mine');
  expect(good.status).toBe(200);
  const stale = await save(draft.revision, 'theirs');
  expect(stale.status).toBe(409);
  const details = (stale.body as { error: { details: { current: DraftDto } } }).error.details;
  expect(JSON.stringify(details.current.doc)).toContain('mine');
});
