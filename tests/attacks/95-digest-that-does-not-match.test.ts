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

it('95: bytes that are not those the browser read are refused, one bit is enough, and nothing is kept', async () => {
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

it("95: the digest of somebody else's file opens nothing without its bytes", async () => {
  const [known] = blobs();
  const sent = await sendFile(lab, lab.people.author, entryId, 'guess.csv', Buffer.from('x'), { sha256: known });
  expect(sent.outcome).toMatchObject({ error: expect.stringContaining('digests differ') });
});

it('30: an upload needs the right to write in the entry, whoever knows its id', async () => {
  const bytes = Buffer.from('t,I\n7,8\n');
  const { outsider, reader, second } = lab.people;
  expect((await sendFile(lab, outsider, entryId, 'a.csv', bytes)).status).toBe(404);
  expect((await sendFile(lab, reader, entryId, 'a.csv', bytes)).status).toBe(403);
  expect((await sendFile(lab, second, entryId, 'a.csv', bytes)).status).toBe(403);
  expect((await sendFile(lab, null, entryId, 'a.csv', bytes)).status).toBe(403);
  expect(
    (await sendFile(lab, lab.people.author, entryId, 'a.csv', bytes, { headers: { origin: 'https://evil.example' } }))
      .status,
  ).toBe(403);
});

it('93: a used-up quota is said before anything is sent', async () => {
  process.env.QUOTA_BYTES = '10';
  const { forgetEnv } = await import('@/server/env/env');
  forgetEnv();
  const sent = await sendFile(lab, lab.people.author, entryId, 'a.csv', Buffer.from('t,I\n7,9\n'));
  delete process.env.QUOTA_BYTES;
  forgetEnv();
  expect(sent).toMatchObject({ status: 400, message: expect.stringContaining('space for files is used up') });
});
