import { expect, it } from 'vitest';
import { sha256, someBytes, startTrial } from '../faults/upload-trial';

it('94: sixty megabytes arrive whole', async () => {
  const trial = await startTrial({ idleMs: 20_000 });
  const bytes = someBytes(60_000_000);
  const { url } = await trial.presign('long.csv', bytes.length);
  const response = await trial.put(url, bytes);
  expect(response.status).toBe(200);
  expect(await response.json()).toMatchObject({ sha256: sha256(bytes) });
  expect(trial.received[0]?.sha256).toBe(sha256(bytes));
  await trial.close();
});
