import { cleanup, render, screen } from '@testing-library/react';
import { afterEach, beforeEach, expect, it, vi } from 'vitest';
import { createHash } from 'node:crypto';
import { fileDigest } from './digest';
import { forgetUpload, uploadIdFor } from './unfinished';
import { UploadList } from './upload-list';

afterEach(cleanup);
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

it('says in words how far a file is, and offers to go on where it broke off', () => {
  const again = vi.fn();
  render(
    <UploadList
      uploads={[
        { id: '1', kind: 'trace', name: 'scan.csv', bytes: 60e6, done: 30e6, state: 'sending', problem: null },
        {
          id: '2',
          kind: 'trace',
          name: 'map.csv',
          bytes: 10,
          done: 5,
          state: 'broken off',
          problem: 'The upload broke off. What arrived is kept; try again to go on.',
        },
      ]}
      attach={vi.fn()}
      pause={vi.fn()}
      resume={vi.fn()}
      again={again}
      dismiss={vi.fn()}
    />,
  );
  expect(screen.getByText(/sending, 30\sMB of 60\sMB/)).toBeTruthy();
  screen.getByRole('button', { name: 'go on map.csv' }).click();
  expect(again).toHaveBeenCalledWith('2');
  expect(screen.getByRole('alert').textContent).toContain('What arrived is kept');
  expect(screen.getAllByRole('progressbar')[0].getAttribute('aria-valuenow')).toBe('50');
});
