import { readdir } from 'node:fs/promises';
import path from 'node:path';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { openPut, partHead, partTail, someBytes, startTrial } from '../faults/upload-trial';

describe('92: 1 kB declared and far more sent; a body that is too slow; addresses that were changed', () => {
  let trial: Awaited<ReturnType<typeof startTrial>>;
  beforeEach(async () => {
    trial = await startTrial({ idleMs: 400 });
  });
  afterEach(() => trial.close());
  const files = async () =>
    (await readdir(path.join(trial.dataDir, 'uploads'))).filter((name) => !name.endsWith('.json'));

  it('cuts an endless body off after the declared size and keeps nothing', async () => {
    const { url } = await trial.presign('small.csv', 1000);
    const { request, response } = openPut(url);
    let sent = 0;
    request.write(partHead);
    const block = someBytes(65_536);
    // 10 GB would come; the service must hang up long before.
    const pump = () => {
      while (sent < 10e9 && !request.destroyed) {
        sent += block.length;
        if (!request.write(block)) {
          request.once('drain', pump);
          return;
        }
      }
    };
    pump();
    const outcome = await response.catch((error: Error) => ({ status: 0, body: error.message }));
    request.destroy();
    // The answer may be lost when the connection is torn down while bytes still come.
    expect([413, 0]).toContain(outcome.status);
    expect(sent).toBeLessThan(50e6);
    expect(await files()).toEqual([]);
    expect(trial.received).toEqual([]);
  });

  it('answers 413 before reading when the length is announced', async () => {
    const { url } = await trial.presign('small.csv', 1000);
    const response = await trial.put(url, someBytes(200_000));
    expect(response.status).toBe(413);
    expect(((await response.json()) as { error: string }).error).toContain('declared 1000 bytes');
  });

  it('answers 400 to a body that ends too early and says how much is kept', async () => {
    const { url } = await trial.presign('short.csv', 1000);
    const response = await trial.put(url, someBytes(600));
    expect(response.status).toBe(400);
    expect(await trial.held(url)).toBe(600);
  });

  it('gives a silent body up and keeps what arrived', async () => {
    const { url } = await trial.presign('slow.csv', 1000);
    const { request, response } = openPut(url);
    request.write(partHead);
    request.write(someBytes(300));
    const { status, body } = await response;
    request.destroy();
    expect(status).toBe(408);
    expect(body).toContain('too slowly');
    expect(await trial.held(url)).toBeGreaterThan(0);
  });

  it('gives up a body that trickles below 1 KiB/s', async () => {
    const { url } = await trial.presign('trickle.csv', 100_000);
    const { request, response } = openPut(url);
    request.on('error', () => undefined /* closed by the service */);
    request.write(partHead);
    const trickle = setInterval(() => request.write(Buffer.from('1')), 100);
    const { status } = await response;
    clearInterval(trickle);
    request.destroy();
    expect(status).toBe(408);
  });

  it('refuses a changed, an unsigned and an expired address', async () => {
    const { url } = await trial.presign('a.csv', 10);
    const bytes = someBytes(10);
    for (const changed of [
      url.replace('file-size=10', 'file-size=11'),
      url.replace('a.csv', 'b.csv'),
      url.replace(/signature=.*/, 'signature=hmac-sha256%3D00'),
      url.replace(/&signature=.*/, ''),
      url.replace(/expires=\d+/, `expires=${Date.now() - 1000}`),
    ]) {
      expect(changed).not.toBe(url);
      expect((await trial.put(changed, bytes)).status).toBe(403);
      expect((await fetch(changed, { method: 'HEAD' })).status).toBe(403);
    }
    expect((await trial.put(url, bytes)).status).toBe(200);
  });

  it('refuses a second PUT of the same file, at once and afterwards', async () => {
    const bytes = someBytes(1000);
    const { url } = await trial.presign('twice.csv', bytes.length);
    const { request, response } = openPut(url);
    request.write(partHead);
    request.write(bytes.subarray(0, 500));
    await new Promise((resolve) => setTimeout(resolve, 100));
    expect((await trial.put(url, bytes)).status).toBe(409);
    request.write(bytes.subarray(500));
    request.end(partTail);
    expect((await response).status).toBe(200);
    expect((await trial.put(url, bytes, 1000)).status).toBe(409);
  });

  it('refuses a forged hook and calls without the application key', async () => {
    const body = JSON.stringify({ status: 'uploaded', metadata: {}, origin: trial.base, file: {} });
    const forged = await fetch(`${trial.origin}/api/uploadthing?slug=trace`, {
      method: 'POST',
      headers: {
        'content-type': 'application/json',
        'uploadthing-hook': 'callback',
        'x-uploadthing-signature': `hmac-sha256=${'0'.repeat(64)}`,
      },
      body,
    });
    expect(forged.status).toBe(400);
    for (const call of ['route-metadata', 'callback-result', 'v6/deleteFiles', 'v6/listFiles']) {
      expect((await fetch(`${trial.base}/${call}`, { method: 'POST', body: '{}' })).status).toBe(401);
    }
  });

  it('lists, reads by signed address only, and deletes as the SDK asks', async () => {
    const bytes = someBytes(5000);
    const { url, key } = await trial.presign('kept.csv', bytes.length);
    await trial.put(url, bytes);
    expect((await trial.utapi.listFiles()).files).toMatchObject([
      { key, name: 'kept.csv', status: 'Uploaded', customId: 'custom-kept.csv' },
    ]);
    expect((await fetch(`${trial.base}/a/kelvinleaf/${key}`)).status).toBe(403);
    const { ufsUrl } = await trial.utapi.generateSignedURL(key, { expiresIn: 60 });
    const read = await fetch(ufsUrl);
    expect(read.headers.get('content-disposition')).toBe('attachment');
    expect(Buffer.from(await read.arrayBuffer()).equals(bytes)).toBe(true);
    expect(await trial.utapi.deleteFiles(key)).toEqual({ success: true, deletedCount: 1 });
    expect((await fetch(ufsUrl)).status).toBe(404);
  });

  it('does not let a path out of its folder', async () => {
    for (const hostile of ['..%2f..%2fetc%2fpasswd', '%2e%2e/secrets.json', 'a/kelvinleaf/..%2f..%2fsecrets.json']) {
      expect([403, 404]).toContain((await fetch(`${trial.base}/${hostile}?expires=9e15&signature=x`)).status);
    }
  });
});
