import type { FileRouter } from 'uploadthing/server';
import { request } from '@/components/hooks/request';
import { AppError } from '@/lib/errors/app-error';
import type { UploadInput, UploadOutcome } from '@/lib/schemas/upload';
import { maxPictureBytes, maxTraceBytes } from '@/lib/schemas/upload-limits';
import { fileDigest } from './digest';
import { forgetUpload, uploadIdFor, type FileMark } from './unfinished';

/** Sends one file to an entry: digest, address, bytes from where an earlier try ended, the server's record. */

export type SendStage = 'reading' | 'sending' | 'recording';
export type Kind = 'trace' | 'picture';

type Running = {
  pauseUpload: () => void;
  resumeUpload: () => void;
  done: () => Promise<{ serverData: unknown }[] | { serverData: unknown }>;
};
/** The one method used of the library; its own type follows the server's router, which a component must not import. */
type CreateUpload = (
  slug: Kind,
  options: { files: File[]; input: UploadInput; onUploadProgress: (event: { loaded: number }) => void },
) => Promise<Running>;

type Uploader = { createUpload: CreateUpload; isAbort: (error: unknown) => boolean };

/** The library is fetched with the first file that is sent. */
async function uploader(): Promise<Uploader> {
  const { genUploader, UploadAbortedError } = await import('uploadthing/client');
  const url = new URL('/api/uploadthing', window.location.origin);
  const { createUpload } = genUploader<FileRouter>({ url, package: '@uploadthing/react' });
  return {
    createUpload: createUpload as unknown as CreateUpload,
    isAbort: (error) => error instanceof UploadAbortedError,
  };
}

/** A refusal that sending again does not change. */
export class Refused extends Error {}
/** The connection broke; what arrived is kept, and sending again goes on from there. */
export class Interrupted extends Error {}

export type SendOptions = {
  entryId: string;
  /** Ends it; what has arrived is kept by the server and used when the file is sent again. */
  signal: AbortSignal;
  onProgress: (done: number, of: number, stage: SendStage) => void;
  /** Gets the means to pause and go on, as soon as bytes are under way. */
  onControl?: (control: { pause: () => void; resume: () => void }) => void;
};

const refusals = new Set(['FORBIDDEN', 'NOT_FOUND', 'BAD_REQUEST', 'TOO_LARGE', 'TOO_SMALL']);

/**
 * Sends one file; resolves with the id of what was received.
 * @throws Refused, Interrupted; AbortError where `signal` ended it
 */
export async function sendFile(kind: Kind, file: File, options: SendOptions): Promise<string> {
  const { entryId, signal, onControl } = options;
  const onProgress = (stage: SendStage, done: number) => options.onProgress(done, file.size, stage);
  const limit = kind === 'trace' ? maxTraceBytes : maxPictureBytes;
  if (file.size === 0) throw new Refused(`${file.name} is empty: it has no bytes. Nothing was sent.`);
  if (file.size > limit) {
    throw new Refused(
      `${file.name} has ${Math.ceil(file.size / 1e6)} MB; a ${kind} may have up to ${limit / 1e6} MB. Nothing was sent; split it.`,
    );
  }
  const digest = await fileDigest(file, (bytes) => onProgress('reading', bytes), signal);
  const mark: FileMark = { entryId, kind, name: file.name, size: file.size, lastModified: file.lastModified, digest };
  const { uploadId, resumed } = uploadIdFor(mark);
  const outcome = (resumed ? await arrived(entryId, uploadId) : null) ?? (await transfer());
  if ('error' in outcome) throw new Refused(outcome.error);
  forgetUpload(mark);
  return outcome.traceId;

  async function transfer(): Promise<UploadOutcome> {
    onProgress('sending', 0);
    try {
      const { createUpload, isAbort } = await uploader();
      const running = await createUpload(kind, {
        files: [file],
        input: { entryId, files: [{ uploadId, sha256: digest }] },
        onUploadProgress: ({ loaded }) =>
          onProgress(loaded >= file.size ? 'recording' : 'sending', Math.min(loaded, file.size)),
      });
      const pause = () => pauseQuietly(running, isAbort);
      onControl?.({ pause, resume: () => running.resumeUpload() });
      signal.throwIfAborted();
      const done = await Promise.race([running.done(), ended(signal, pause)]);
      const { serverData } = Array.isArray(done) ? done[0] : done;
      if (serverData && typeof serverData === 'object' && ('traceId' in serverData || 'error' in serverData)) {
        return serverData as UploadOutcome;
      }
    } catch (error) {
      if (signal.aborted) throw error;
      // The answer may have been lost on the way while the file has arrived.
      const known = await arrived(entryId, uploadId);
      if (known) return known;
      throw asFailure(error);
    }
    const known = await arrived(entryId, uploadId);
    if (known) return known;
    throw new Interrupted('The file was sent, but the server has not answered. It is kept; try again to go on.');
  }
}

function pauseQuietly(running: Running, isAbort: Uploader['isAbort']): void {
  try {
    running.pauseUpload();
  } catch (error) {
    // The library throws where it is paused already; that is what was asked for.
    if (!isAbort(error)) throw error;
  }
}

/** Rejects when `signal` ends the upload, after the bytes have been stopped. */
function ended(signal: AbortSignal, stop: () => void): Promise<never> {
  return new Promise((_, reject) => {
    signal.addEventListener('abort', () => {
      stop();
      reject(signal.reason);
    });
  });
}

async function arrived(entryId: string, uploadId: string): Promise<UploadOutcome | null> {
  try {
    return await request<UploadOutcome>('GET', `/api/entries/${encodeURIComponent(entryId)}/uploads/${uploadId}`);
  } catch (error) {
    if (error instanceof AppError && error.code === 'not_found') return null;
    if (error instanceof AppError) throw new Refused(error.message);
    throw new Interrupted('The network is away. What arrived is kept; try again when it is back.', { cause: error });
  }
}

function asFailure(error: unknown): Error {
  if (!(error instanceof Error))
    return new Interrupted('The upload broke off. What arrived is kept; try again to go on.');
  const { code, data } = error as Error & { code?: string; data?: { error?: unknown } };
  if (typeof data?.error === 'string') return new Interrupted(data.error, { cause: error });
  if (code && refusals.has(code)) return new Refused(error.message, { cause: error });
  return new Interrupted('The upload broke off. What arrived is kept; try again to go on.', { cause: error });
}
