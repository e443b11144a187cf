import { afterEach, describe, expect, it } from 'vitest';
import { sha256, someBytes, startTrial } from './upload-trial';

describe('33: an upload cut off at 0, 1, 50 and 99.9 % resumes, and the digest is equal', () => {
  let trial: Awaited<ReturnType<typeof startTrial>>;
  afterEach(() => trial.close());

  it.each([0, 0.01, 0.5, 0.999])('cut at %d of the file', async (share) => {
    trial = await startTrial();
    const bytes = someBytes(3_000_000);
    const { url, key } = await trial.presign('wait scan µ.csv', bytes.length);
    await trial.putAndBreak(url, bytes, Math.round(bytes.length * share));
    const held = await trial.held(url);
    expect(held).toBeLessThanOrEqual(Math.round(bytes.length * share));
    if (share >= 0.5) expect(held).toBeGreaterThan(0);
    const response = await trial.put(url, bytes, held);
    expect(response.status).toBe(200);
    expect(await response.json()).toMatchObject({ serverData: { taken: true }, sha256: sha256(bytes) });
    expect(trial.received).toEqual([
      { key, name: 'wait scan µ.csv', size: bytes.length, customId: 'custom-wait scan µ.csv', sha256: sha256(bytes) },
    ]);
  });

  it('refuses to go on from another byte than the one it holds', async () => {
    trial = await startTrial();
    const bytes = someBytes(100_000);
    const { url } = await trial.presign('a.csv', bytes.length);
    await trial.putAndBreak(url, bytes, 50_000);
    expect((await trial.put(url, bytes, 10)).status).toBe(409);
    expect((await trial.put(url, bytes, await trial.held(url))).status).toBe(200);
  });
});
