import { expect, it } from 'vitest';
import { sha256, someBytes, startTrial } from './upload-trial';

it('36: a server restarted in the middle of an upload goes on from the bytes it holds', async () => {
  const bytes = someBytes(500_000);
  const first = await startTrial();
  const { url } = await first.presign('trace.csv', bytes.length);
  await first.putAndBreak(url, bytes, 300_000);
  await first.close({ keep: true });

  const second = await startTrial({ dataDir: first.dataDir });
  const again = await second.presign('trace.csv', bytes.length);
  const held = await second.held(again.url);
  expect(held).toBeGreaterThan(0);
  expect((await second.put(again.url, bytes, held)).status).toBe(200);
  expect(second.received.map((file) => file.sha256)).toEqual([sha256(bytes)]);
  await second.close();
});

it('36: a server that stopped between storing a file and telling the application tells it when asked again', async () => {
  const trial = await startTrial({ callbackMs: 300 });
  const bytes = someBytes(1000);
  trial.answerWith(() => {
    throw new Error('the application stops here');
  });
  const { url } = await trial.presign('trace.csv', bytes.length);
  expect((await trial.put(url, bytes)).status).toBe(502);
  trial.answerWith(() => ({ taken: 'now' }));
  expect(await trial.held(url)).toBe(bytes.length);
  const retry = await trial.put(url, bytes, bytes.length);
  expect(retry.status).toBe(200);
  expect(await retry.json()).toMatchObject({ serverData: { taken: 'now' } });
  expect((await trial.put(url, bytes, bytes.length)).status).toBe(409);
  await trial.close();
});
