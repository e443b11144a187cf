import 'server-only';
import { createHash, randomBytes } from 'node:crypto';
import { createReadStream } from 'node:fs';
import fs from 'node:fs/promises';
import path from 'node:path';
import { Readable } from 'node:stream';
import { AppError } from '@/lib/errors/app-error';
import { syncFolder } from '@/server/db/files';
import { env } from '@/server/env/env';

/**
 * The store of received bytes: one file per digest under `DATA_DIR/blobs`, so that the same file attached twice lies there once.
 *
 * Guarantee: a file named by its digest is whole and was on disk before the record that refers to it was written, except
 * where the disk lies about fsync. Files whose record was never written are swept.
 */

const digestShape = /^[0-9a-f]{64}$/;

function folder(): string {
  return path.join(/* turbopackIgnore: true */ env().dataDir, 'blobs');
}

/** Where the bytes of a digest lie. */
export function blobPath(sha256: string): string {
  if (!digestShape.test(sha256)) throw new AppError('invalid', 'This is no SHA-256 digest.');
  return path.join(/* turbopackIgnore: true */ folder(), sha256);
}

/**
 * Takes a stream into the store and compares it with what the browser declared.
 * @throws AppError invalid (another digest or size; nothing is kept), storage_full.
 */
export async function storeBlob(
  stream: AsyncIterable<Uint8Array>,
  declared: { sha256: string; bytes: number },
): Promise<void> {
  const target = blobPath(declared.sha256);
  await fs.mkdir(folder(), { recursive: true, mode: 0o700 });
  const draft = path.join(/* turbopackIgnore: true */ folder(), `.${randomBytes(9).toString('hex')}.new`);
  try {
    const hash = createHash('sha256');
    const handle = await fs.open(draft, 'wx', 0o600);
    let bytes = 0;
    try {
      for await (const chunk of stream) {
        bytes += chunk.length;
        if (bytes > declared.bytes) break;
        hash.update(chunk);
        await handle.writeFile(chunk);
      }
      await handle.sync();
    } finally {
      await handle.close();
    }
    if (bytes !== declared.bytes) {
      throw new AppError(
        'invalid',
        `Not the declared ${declared.bytes} bytes arrived. Nothing was kept; attach the file again.`,
      );
    }
    if (hash.digest('hex') !== declared.sha256) {
      throw new AppError(
        'invalid',
        'The bytes that arrived are not those your browser read: their SHA-256 digests differ. Nothing was kept; attach the file again.',
      );
    }
    await fs.rename(draft, target);
    await syncFolder(folder());
  } catch (error) {
    await fs.rm(draft, { force: true });
    const code = error instanceof Error && 'code' in error ? error.code : null;
    if (code === 'ENOSPC' || code === 'EDQUOT') {
      throw new AppError(
        'storage_full',
        'The disk is full. Nothing of this file was kept; make room and attach it again.',
        { cause: error },
      );
    }
    throw error;
  }
}

/** The first bytes of a stored file. */
export async function blobHead(sha256: string, length = 64): Promise<Uint8Array> {
  const handle = await fs.open(blobPath(sha256), 'r');
  try {
    const { buffer, bytesRead } = await handle.read(Buffer.alloc(length), 0, length, 0);
    return buffer.subarray(0, bytesRead);
  } finally {
    await handle.close();
  }
}

/** The bytes of a stored file, read as they are asked for. */
export function blobStream(sha256: string): ReadableStream<Uint8Array> {
  return Readable.toWeb(createReadStream(/* turbopackIgnore: true */ blobPath(sha256))) as ReadableStream<Uint8Array>;
}

export async function hasBlob(sha256: string): Promise<boolean> {
  try {
    await fs.access(blobPath(sha256));
    return true;
  } catch {
    return false;
  }
}

/**
 * Removes what a crash left behind: unfinished drafts, and files that no record refers to.
 * @param isReferred whether a record names the digest
 * @param olderThanMs younger files may belong to an upload that is just being recorded
 */
export async function sweepBlobs(
  isReferred: (sha256: string) => Promise<boolean>,
  olderThanMs = 3_600_000,
): Promise<number> {
  let removed = 0;
  const names = await fs.readdir(folder()).catch((error: NodeJS.ErrnoException) => {
    if (error.code === 'ENOENT') return [];
    throw error;
  });
  for (const name of names) {
    const file = path.join(/* turbopackIgnore: true */ folder(), name);
    if (Date.now() - (await fs.stat(file)).mtimeMs < olderThanMs) continue;
    if (digestShape.test(name) && (await isReferred(name))) continue;
    await fs.rm(file, { force: true });
    removed += 1;
  }
  return removed;
}
