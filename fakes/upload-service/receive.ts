import { createHash } from 'node:crypto';
import type { FileHandle } from 'node:fs/promises';
import { rm } from 'node:fs/promises';
import { Readable } from 'node:stream';
import busboy from 'busboy';
import type { UploadAddress } from './address';
import type { UploadServiceConfig } from './config';
import { ServiceRefusal } from './config';
import type { UploadStore } from './store';

/** Takes one multipart body to `<key>.part`, from the byte that the client resumes at. */

/** Boundary lines and part headers around the file's bytes. */
const multipartOverhead = 64 * 1024;
/** The least rate, in bytes per millisecond, once the grace of `idleMs` is over. */
const leastRate = 1.024;

async function writeAll(handle: FileHandle, bytes: Uint8Array, position: number): Promise<void> {
  let done = 0;
  while (done < bytes.length) {
    done += (await handle.write(bytes, done, bytes.length - done, position + done)).bytesWritten;
  }
}

/** @returns digests of the whole file, once every declared byte is on disk. */
export async function receiveBody(
  config: UploadServiceConfig,
  store: UploadStore,
  address: UploadAddress,
  request: Request,
): Promise<{ md5: string; sha256: string }> {
  const { key, size } = address;
  const held = (await store.size(store.part(key))) ?? 0;
  const start = rangeStart(request.headers.get('range'));
  if (start !== held) {
    throw new ServiceRefusal(
      409,
      `The service holds ${held} bytes, the upload went on from ${start}. Ask how many are held and resume there.`,
    );
  }
  const announced = Number(request.headers.get('content-length'));
  if (announced > size - start + multipartOverhead) throw tooLong(size);
  const contentType = request.headers.get('content-type') ?? '';
  if (!request.body || !contentType.startsWith('multipart/form-data')) {
    throw new ServiceRefusal(400, 'The upload must be a multipart form with one file.');
  }
  if ((await store.total()) - held + size > config.quotaBytes) {
    throw new ServiceRefusal(
      507,
      'The space for uploads is used up. Nothing of this file was kept; ask the administrator to make room.',
    );
  }

  const md5 = createHash('md5');
  const sha256 = createHash('sha256');
  const handle = await store.openPart(key);
  let position = start;
  try {
    await hashHeld(handle, held, (bytes) => {
      md5.update(bytes);
      sha256.update(bytes);
    });
    const write = config.write ?? writeAll;
    await readFilePart(config, request.body, contentType, async (bytes) => {
      if (position + bytes.length > size) throw tooLong(size);
      await write(handle, bytes, position);
      position += bytes.length;
      md5.update(bytes);
      sha256.update(bytes);
    });
    await handle.sync();
    if (position < size) {
      throw new ServiceRefusal(400, `Only ${position} of ${size} bytes arrived. They are kept; resume the upload.`);
    }
  } catch (error) {
    await handle.close();
    throw await afterFailure(store, key, error);
  }
  await handle.close();
  return { md5: md5.digest('hex'), sha256: sha256.digest('hex') };
}

function tooLong(size: number): ServiceRefusal {
  return new ServiceRefusal(
    413,
    `More than the declared ${size} bytes were sent. Nothing was kept; start the upload again.`,
  );
}

/** What is left of a failed upload: a part that can be resumed, or nothing. */
async function afterFailure(store: UploadStore, key: string, error: unknown): Promise<unknown> {
  const code = error instanceof Error && 'code' in error ? error.code : null;
  if (code === 'ENOSPC' || code === 'EDQUOT' || code === 'EFBIG') {
    await rm(store.part(key), { force: true });
    return new ServiceRefusal(
      507,
      'The disk is full. Nothing of this file was kept; make room and start the upload again.',
    );
  }
  if (error instanceof ServiceRefusal && error.status === 413) await rm(store.part(key), { force: true });
  return error;
}

function rangeStart(header: string | null): number {
  const match = /^bytes=([0-9]{1,15})-$/.exec(header ?? 'bytes=0-');
  if (!match) throw new ServiceRefusal(400, 'The upload must say where it starts, as `bytes=N-`.');
  return Number(match[1]);
}

async function hashHeld(handle: FileHandle, held: number, update: (bytes: Uint8Array) => void): Promise<void> {
  const buffer = Buffer.alloc(1 << 20);
  for (let at = 0; at < held;) {
    const { bytesRead } = await handle.read(buffer, 0, Math.min(buffer.length, held - at), at);
    if (bytesRead === 0) throw new Error('the part is shorter than its size');
    update(buffer.subarray(0, bytesRead));
    at += bytesRead;
  }
}

/** Feeds the bytes of the only file of a multipart body to `take`, one piece after the other. */
async function readFilePart(
  config: UploadServiceConfig,
  body: ReadableStream<Uint8Array>,
  contentType: string,
  take: (bytes: Uint8Array) => Promise<void>,
): Promise<void> {
  let parser: busboy.Busboy;
  try {
    parser = busboy({
      headers: { 'content-type': contentType },
      limits: { files: 1, fields: 0, parts: 1, headerPairs: 20 },
    });
  } catch (error) {
    throw new ServiceRefusal(
      400,
      `The multipart form cannot be read: ${error instanceof Error ? error.message : String(error)}`,
    );
  }
  const reader = body.getReader();
  const began = Date.now();
  let received = 0;
  let files = 0;
  let failure: unknown = null;
  let writing: Promise<void> = Promise.resolve();
  const fail = (error: unknown) => {
    failure ??= error;
  };
  const closed = new Promise<void>((resolve) => {
    parser.on('close', resolve);
    parser.on('error', (error) => {
      fail(
        new ServiceRefusal(
          400,
          `The upload broke off: ${error instanceof Error ? error.message : String(error)}. What arrived is kept; resume it.`,
        ),
      );
      resolve();
    });
  });
  let writeFailed = false;
  parser.on('file', (_name, stream: Readable) => {
    files += 1;
    writing = (async () => {
      for await (const chunk of stream) await take(chunk as Uint8Array);
    })();
    writing.catch((error: unknown) => {
      writeFailed = true;
      fail(error);
    });
  });

  try {
    while (failure === null) {
      const { done, value } = await withDeadline(reader.read(), config.idleMs);
      if (done) break;
      received += value.length;
      const elapsed = Date.now() - began;
      if (elapsed > config.idleMs && received < (elapsed - config.idleMs) * leastRate) throw tooSlow();
      // A parser that is behind is waited for, so that no more than its buffer lies in memory.
      if (!parser.write(value))
        await Promise.race([new Promise((resolve) => parser.once('drain', resolve)), closed, writing]);
    }
  } catch (error) {
    fail(
      error instanceof ServiceRefusal
        ? error
        : new ServiceRefusal(400, 'The connection broke off. What arrived is kept; resume the upload.'),
    );
  }
  // The rest of the body is not read: the answer to a refusal closes the connection.
  if (writeFailed) {
    parser.destroy();
  } else {
    parser.end();
    await closed;
    await writing.catch(fail);
  }
  if (failure !== null) throw failure;
  if (files === 0) throw new ServiceRefusal(400, 'The form holds no file.');
}

function tooSlow(): ServiceRefusal {
  return new ServiceRefusal(408, 'The upload came too slowly and was closed. What arrived is kept; resume it.');
}

async function withDeadline<T>(promise: Promise<T>, ms: number): Promise<T> {
  let timer: NodeJS.Timeout | undefined;
  const late = new Promise<never>((_, reject) => {
    timer = setTimeout(() => reject(tooSlow()), ms);
  });
  try {
    return await Promise.race([promise, late]);
  } finally {
    clearTimeout(timer);
  }
}
