import { readdirSync } from 'node:fs';
import path from 'node:path';
import { afterAll, beforeAll, expect, it } from 'vitest';
import { digestOf, newEntry, sendFile, startUploads, type Uploads } from '../integration/uploads';

let lab: Uploads;
let entryId: string;
beforeAll(async () => {
  lab = await startUploads();
  entryId = await newEntry(lab);
});
afterAll(() => lab.close());

const blobs = () => {
  try {
    return readdirSync(path.join(lab.dataDir, 'blobs'));
  } catch {
    return [];
  }
};

it('34: bytes that are not those the browser read are refused, one bit is enough, and nothing is kept', async () => {
  const bytes = Buffer.from('t,I\n0,1\n1,2\n');
  const flipped = Buffer.from(bytes);
  flipped[5] ^= 1;
  const sent = await sendFile(lab, lab.people.author, entryId, 'scan.csv', flipped, { sha256: digestOf(bytes) });
  expect(sent.outcome).toMatchObject({ error: expect.stringContaining('SHA-256 digests differ') });
  expect(blobs()).toEqual([]);
  expect(await sendFile(lab, lab.people.author, entryId, 'scan.csv', bytes)).toMatchObject({
    outcome: { state: 'parsed' },
  });
});

it('35: the same file twice is one blob and two references', async () => {
  const bytes = Buffer.from('t,I\n5,6\n');
  const first = await sendFile(lab, lab.people.author, entryId, 'a.csv', bytes);
  const second = await sendFile(lab, lab.people.author, entryId, 'b.csv', bytes);
  expect(first.outcome).toMatchObject({ state: 'parsed' });
  expect(second.outcome).toMatchObject({ state: 'parsed' });
  expect(second.outcome).not.toEqual(first.outcome);
  expect(blobs().filter((name) => name === digestOf(bytes))).toHaveLength(1);
});

it('38: an empty file and one beyond the limit are refused before anything is sent', async () => {
  const { author } = lab.people;
  expect(await sendFile(lab, author, entryId, 'empty.csv', Buffer.alloc(0))).toMatchObject({
    status: 400,
    message: expect.stringContaining('is empty'),
  });
  const large = await sendFile(lab, author, entryId, 'large.csv', Buffer.from('x'), { size: 5_000_000_000 });
  expect(large).toMatchObject({ status: 400, message: expect.stringContaining('up to 200 MB') });
});
