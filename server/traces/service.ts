import 'server-only';
import { now } from '@/server/clock/service';
import { randomUUID } from 'node:crypto';
import { eq } from 'drizzle-orm';
import { AppError } from '@/lib/errors/app-error';
import type { TraceDto } from '@/lib/schemas/entry';
import { initialsOf } from '@/lib/schemas/person';
import type { UploadOutcome } from '@/lib/schemas/upload';
import { pictureType } from '@/lib/trace-format/signature';
import { getDb } from '@/server/db/client';
import { user } from '@/server/db/schema/people';
import { report } from '@/server/diagnostics/report';
import { env } from '@/server/env/env';
import { enqueueJob } from '@/server/jobs/service';
import { appendLog } from '@/server/log/service';
import { blobHead, blobStream, hasBlob, storeBlob, sweepBlobs } from './blobs';
import { readFacts, ingestBlob, type IngestLimits } from './ingest';
import * as queries from './queries';

export { readColumn, readRows, readView } from './columns';

export type ReceivedFile = {
  kind: 'trace' | 'picture';
  notebookId: string;
  entryId: string;
  personId: string;
  uploadId: string;
  fileName: string;
  mediaType: string;
  bytes: number;
  sha256: string;
  content: AsyncIterable<Uint8Array>;
};

/** How long an upload's answer waits for the parser; a longer file is shown as being read. */
const patienceMs = 8000;

/** Bytes that may still be received. */
export async function roomLeft(): Promise<number> {
  return env().quotaBytes - (await queries.storedBytes(await getDb()));
}

/**
 * Takes a file in: its bytes are on disk before its record is written, and the record carries its log leaf.
 * An upload that was recorded already is answered with its record; bytes that are in the store already are not written twice.
 * @throws AppError invalid where digest, size or a picture's content do not hold; storage_full.
 */
export async function receiveFile(file: ReceivedFile): Promise<UploadOutcome> {
  const db = await getDb();
  const known = await queries.findUpload(db, file);
  if (known) return { traceId: known.id, state: known.state };
  // The bytes are read and compared even where the digest is known: a digest alone must not open somebody else's file.
  await storeBlob(file.content, file);
  let mediaType = /^[\w.+-]{1,60}\/[\w.+-]{1,60}$/.test(file.mediaType) ? file.mediaType : 'application/octet-stream';
  if (file.kind === 'picture') {
    const type = pictureType(await blobHead(file.sha256));
    if (!type) {
      throw new AppError(
        'wrong_type',
        `"${file.fileName}" is no PNG, JPEG, GIF or WebP picture by its content. It was not attached; convert it, or attach it as a trace.`,
      );
    }
    mediaType = type;
  }
  const id = randomUUID();
  const { kind, notebookId, entryId, personId, uploadId, fileName, bytes, sha256 } = file;
  const state = kind === 'picture' ? ('parsed' as const) : ('received' as const);
  const isNew = await db.transaction(async (tx) => {
    const row = {
      id,
      notebookId,
      entryId,
      kind,
      fileName,
      mediaType,
      bytes,
      sha256,
      state,
      uploadId,
      uploadedBy: personId,
      receivedAt: now(),
    };
    if (!(await queries.insertTrace(tx, row))) return false;
    await appendLog(tx, {
      kind: 'trace received',
      actorId: personId,
      notebookId,
      entryId,
      detail: { traceId: id, kind, fileName, bytes, sha256 },
    });
    // The job does it should this process end first; reading twice does no harm.
    if (kind === 'trace') await enqueueJob(tx, 'ingest trace', `ingest trace ${id}`, { traceId: id });
    return true;
  });
  if (!isNew) {
    const first = await queries.findUpload(db, file);
    if (!first)
      throw new AppError('conflict', 'This upload was recorded and is gone again. Attach the file once more.');
    return { traceId: first.id, state: first.state };
  }
  if (kind === 'picture') return { traceId: id, state };
  const reading = readReceived(id).catch((error: unknown) => {
    report('a received file could not be read', { traceId: id }, error);
    return 'received' as const;
  });
  return { traceId: id, state: await Promise.race([reading, later('received' as const)]) };
}

function later<T>(value: T): Promise<T> {
  return new Promise((resolve) => setTimeout(() => resolve(value), patienceMs).unref());
}

/**
 * Parses the file of a trace and records its columns, or a sentence why it cannot be read. Doing it again changes nothing.
 */
export async function ingestTrace(id: string, limits?: IngestLimits): Promise<void> {
  await readReceived(id, limits);
}

async function readReceived(id: string, limits?: IngestLimits): Promise<'received' | 'parsed' | 'unreadable'> {
  const db = await getDb();
  const row = await queries.findTrace(db, id);
  if (!row || row.state !== 'received') return row?.state ?? 'unreadable';
  const result = await ingestBlob(row.sha256, limits);
  await db.transaction(async (tx) => {
    if (!result.ok) {
      await queries.settleTrace(tx, id, { state: 'unreadable', problem: result.problem, rows: 0, comments: [] }, []);
      return;
    }
    const { trace } = result;
    const columns = trace.columns.map((column, position) => ({
      position,
      name: column.name,
      symbol: column.symbol,
      unit: column.unit,
      missing: column.missing,
      minimum: column.min === null ? null : String(column.min),
      maximum: column.max === null ? null : String(column.max),
    }));
    await queries.settleTrace(
      tx,
      id,
      { state: 'parsed', problem: null, rows: trace.rows, comments: trace.comments },
      columns,
    );
  });
  return result.ok ? 'parsed' : 'unreadable';
}

/** At start-up or in the hourly tidying: files that were received and not yet read are read, and what a crash left in the store is removed. */
export async function settleTraces(): Promise<{ read: number; swept: number }> {
  const db = await getDb();
  let read = 0;
  for (const { id } of await queries.unsettled(db)) {
    try {
      await ingestTrace(id);
      read += 1;
    } catch (error) {
      report('a received file could not be read', { traceId: id }, error);
    }
  }
  const swept = await sweepBlobs((sha256) => queries.isReferred(db, sha256));
  return { read, swept };
}

export type TraceDetail = TraceDto & {
  /** How the file was read: what was decided and what is to be checked; null until it is parsed. */
  reading: { decided: string; notes: string[] } | null;
};

/** @throws AppError not_found, also for a picture. */
export async function traceDetail(id: string): Promise<TraceDetail> {
  const db = await getDb();
  const row = await queries.findTrace(db, id);
  if (!row || row.kind !== 'trace')
    throw new AppError('not_found', 'There is nothing here, or it is not for you to see.');
  const columns = await queries.columnsOf(db, id);
  const [uploader] = await db.select({ name: user.name }).from(user).where(eq(user.id, row.uploadedBy));
  const facts = row.state === 'parsed' ? await readFacts(row.sha256) : null;
  return {
    id: row.id,
    entryId: row.entryId,
    fileName: row.fileName,
    mediaType: row.mediaType,
    bytes: row.bytes,
    sha256: row.sha256,
    state: row.state,
    problem: row.problem,
    rows: row.rows,
    columns: columns.map(({ name, symbol, unit, missing, minimum, maximum }) => ({
      name,
      symbol,
      unit,
      missing,
      min: minimum === null ? null : Number(minimum),
      max: maximum === null ? null : Number(maximum),
    })),
    comments: row.comments,
    uploadedBy: { id: row.uploadedBy, name: uploader?.name ?? '', initials: initialsOf(uploader?.name ?? '') },
    receivedAt: row.receivedAt.toISOString(),
    reading: facts ? { decided: facts.dialect.decided, notes: facts.notes } : null,
  };
}

/** The stored file of a trace or picture, for serving. */
export async function storedFile(
  id: string,
  kind: 'trace' | 'picture',
): Promise<{ content: ReadableStream<Uint8Array>; bytes: number; fileName: string; mediaType: string }> {
  const row = await queries.findTrace(await getDb(), id);
  if (!row || row.kind !== kind) throw new AppError('not_found', 'There is nothing here, or it is not for you to see.');
  if (!(await hasBlob(row.sha256))) {
    throw new AppError(
      'unavailable',
      `The bytes of "${row.fileName}" are missing from the data folder. Its record and digest are kept; restore the file from a backup.`,
    );
  }
  const { sha256, bytes, fileName, mediaType } = row;
  return { content: blobStream(sha256), bytes, fileName, mediaType };
}

/** The digest that a parsed trace's columns are read by. */
export async function parsedDigest(id: string): Promise<string> {
  const row = await queries.findTrace(await getDb(), id);
  if (!row || row.kind !== 'trace')
    throw new AppError('not_found', 'There is nothing here, or it is not for you to see.');
  if (row.state !== 'parsed')
    throw new AppError('conflict', row.problem ?? 'The file is still being read. Try again in a moment.');
  return row.sha256;
}

/** Whether an upload of this person has arrived: asked before sending a file again whose answer was lost. */
export async function receivedUpload(by: {
  personId: string;
  entryId: string;
  uploadId: string;
}): Promise<UploadOutcome | null> {
  const row = await queries.findUpload(await getDb(), by);
  return row ? { traceId: row.id, state: row.state } : null;
}
