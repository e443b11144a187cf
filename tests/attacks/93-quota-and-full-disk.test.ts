import { readdir } from 'node:fs/promises';
import path from 'node:path';
import { expect, it } from 'vitest';
import { someBytes, startTrial } from '../faults/upload-trial';

const filesIn = async (dataDir: string) =>
  (await readdir(path.join(dataDir, 'uploads'))).filter((name) => !name.endsWith('.json'));

it('93: a used-up quota is a sentence, and nothing of the file is kept', async () => {
  const trial = await startTrial({ quotaBytes: 5000 });
  const { url } = await trial.presign('big.csv', 6000);
  const response = await trial.put(url, someBytes(6000));
  expect(response.status).toBe(507);
  expect(((await response.json()) as { error: string }).error).toContain('space for uploads is used up');
  expect(await filesIn(trial.dataDir)).toEqual([]);
  await trial.close();
});

it('93: a disk that fills up in the middle leaves no file behind, and the upload can start again', async () => {
  let full = true;
  const trial = await startTrial({
    write: async (handle, bytes, position) => {
      // The error of write(2) on a full file system.
      if (full && position + bytes.length > 100_000)
        throw Object.assign(new Error('no space left on device'), { code: 'ENOSPC' });
      await handle.write(bytes, 0, bytes.length, position);
    },
  });
  const bytes = someBytes(300_000);
  const { url } = await trial.presign('big.csv', bytes.length);
  const response = await trial.put(url, bytes);
  expect(response.status).toBe(507);
  expect(((await response.json()) as { error: string }).error).toContain('disk is full');
  expect(await filesIn(trial.dataDir)).toEqual([]);
  expect(await trial.held(url)).toBe(0);
  full = false;
  expect((await trial.put(url, bytes)).status).toBe(200);
  await trial.close();
});
