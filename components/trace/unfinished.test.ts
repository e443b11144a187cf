import { beforeEach, expect, it } from 'vitest';
import { createHash } from 'node:crypto';
import { fileDigest } from './digest';
import { forgetUpload, uploadIdFor } from './unfinished';

beforeEach(() => localStorage.clear());

it('computes the digest slice by slice, equal to the whole file at once', async () => {
  const bytes = Uint8Array.from({ length: 2_500_000 }, (_, i) => (i * 31) & 255);
  const steps: number[] = [];
  const digest = await fileDigest(new Blob([bytes]), (done) => steps.push(done), new AbortController().signal);
  expect(digest).toBe(createHash('sha256').update(bytes).digest('hex'));
  expect(steps).toEqual([1 << 20, 2 << 20, 2_500_000]);
});

it('goes on under the same id after a break, and begins a new reference once it has arrived', () => {
  const mark = { entryId: 'e', kind: 'trace', name: 'a.csv', size: 3, lastModified: 1, digest: 'd' };
  const first = uploadIdFor(mark);
  expect(first.resumed).toBe(false);
  expect(uploadIdFor(mark)).toEqual({ uploadId: first.uploadId, resumed: true });
  expect(uploadIdFor({ ...mark, digest: 'other' }).uploadId).not.toBe(first.uploadId);
  forgetUpload(mark);
  expect(uploadIdFor(mark).uploadId).not.toBe(first.uploadId);
});
