import { expect, it } from 'vitest';
import { someBytes, startTrial } from './upload-trial';

it('39: names in NFC and NFD arrive letter for letter and are two files', async () => {
  const trial = await startTrial();
  const composed = 'Übergänge Å.csv'.normalize('NFC');
  const decomposed = composed.normalize('NFD');
  expect(decomposed).not.toBe(composed);
  for (const name of [composed, decomposed, '図 🙂 100% & =.csv']) {
    const { url } = await trial.presign(name, 20);
    expect((await trial.put(url, someBytes(20))).status).toBe(200);
  }
  expect(trial.received.map(({ name }) => name)).toEqual([composed, decomposed, '図 🙂 100% & =.csv']);
  expect(new Set(trial.received.map(({ key }) => key)).size).toBe(3);
  await trial.close();
});
