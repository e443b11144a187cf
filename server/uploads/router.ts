import 'server-only';
import { createHash } from 'node:crypto';
import { eq } from 'drizzle-orm';
import { createUploadthing, UploadThingError, UTFiles, type FileRouter } from 'uploadthing/server';
import { z } from 'zod';
import { AppError } from '@/lib/errors/app-error';
import { initialsOf } from '@/lib/schemas/person';
import { sha256Schema, uploadIdSchema, uploadInputSchema, type UploadOutcome } from '@/lib/schemas/upload';
import { maxPictureBytes, maxTraceBytes } from '@/lib/schemas/upload-limits';
import { cleanFileName } from '@/lib/trace-format/file-name';
import { findPerson, type Person } from '@/server/access/person';
import { authorise } from '@/server/access/scope';
import { getDb } from '@/server/db/client';
import { user } from '@/server/db/schema/people';
import { report } from '@/server/diagnostics/report';
import { receiveFile, roomLeft } from '@/server/traces/service';
import { uploadApi } from './sdk';

/** What travels through the upload service with each file, signed by our key. */
const fileSchema = z.object({
  customId: z.string(),
  uploadId: uploadIdSchema,
  sha256: sha256Schema,
  name: z.string(),
  bytes: z.number(),
});
const metadataSchema = z.object({ personId: z.string(), entryId: z.uuid(), files: z.array(fileSchema) });

const codes = { 403: 'FORBIDDEN', 404: 'NOT_FOUND' } as const;

/** The library answers 500 to an error without a code of its own. */
function asUploadError(error: unknown): UploadThingError {
  if (error instanceof AppError) {
    const code = codes[error.status as keyof typeof codes] ?? (error.status === 401 ? 'FORBIDDEN' : 'BAD_REQUEST');
    return new UploadThingError({ code, message: error.message });
  }
  report('upload could not begin', {}, error);
  return new UploadThingError({
    code: 'INTERNAL_SERVER_ERROR',
    message: 'The upload could not begin. Nothing was sent; try again.',
  });
}

type Announced = readonly { name: string; size: number; type: string }[];

async function begin(
  kind: 'trace' | 'picture',
  request: Request,
  input: z.infer<typeof uploadInputSchema>,
  announced: Announced,
) {
  const person = await findPerson(request.headers);
  await authorise('entry.write', person, input.entryId);
  if (input.files.length !== announced.length)
    throw new AppError('invalid', 'Every file needs its digest. Attach the files again.');
  const limit = kind === 'trace' ? maxTraceBytes : maxPictureBytes;
  let total = 0;
  for (const { name, size } of announced) {
    if (!Number.isSafeInteger(size) || size <= 0) {
      throw new AppError('invalid', `The file "${cleanFileName(name)}" is empty: it has no bytes. Nothing was sent.`);
    }
    if (size > limit) {
      throw new AppError(
        'too_large',
        `The file "${cleanFileName(name)}" has ${Math.ceil(size / 1e6)} MB; a ${kind} may have up to ${limit / 1e6} MB. Nothing was sent; split it.`,
      );
    }
    total += size;
  }
  if (total > (await roomLeft())) {
    throw new AppError(
      'storage_full',
      'The space for files is used up. Nothing was sent; ask the administrator to make room.',
    );
  }
  const personId = (person as Person).id;
  const files = announced.map(({ name, size }, i) => {
    const { uploadId, sha256 } = input.files[i] as { uploadId: string; sha256: string };
    // The browser's own id, bound to who sends it and where to: another person's id opens nothing.
    const customId = createHash('sha256').update(`${personId}\n${input.entryId}\n${kind}\n${uploadId}`).digest('hex');
    return { customId, uploadId, sha256, name: cleanFileName(name), bytes: size };
  });
  return {
    personId,
    entryId: input.entryId,
    files,
    [UTFiles]: announced.map((file, i) => ({ ...file, name: files[i]?.name ?? '', customId: files[i]?.customId })),
  };
}

/** The sender again, at the end of an upload: the right may have gone in between. */
async function personById(id: string): Promise<Person | null> {
  const [row] = await (await getDb()).select().from(user).where(eq(user.id, id));
  if (!row || row.disabledAt) return null;
  const { name, email } = row;
  return {
    id,
    name,
    email,
    initials: initialsOf(name),
    role: 'member',
    twoFactor: false,
    by: 'session',
    sessionId: null,
    sessionStartedAt: null,
  };
}

async function* bytesOf(address: string): AsyncGenerator<Uint8Array> {
  const response = await fetch(address, { cache: 'no-store' });
  if (!response.ok || !response.body)
    throw new Error(`the upload service answered ${response.status} to a signed read`);
  const reader = response.body.getReader();
  for (let part = await reader.read(); !part.done; part = await reader.read()) yield part.value;
}

/** Errors are returned, not thrown: the library would keep them from the browser. */
async function complete(
  kind: 'trace' | 'picture',
  raw: unknown,
  file: { key: string; customId: string | null; type: string },
): Promise<UploadOutcome> {
  const api = uploadApi();
  try {
    const metadata = metadataSchema.parse(raw);
    const declared = metadata.files.find(({ customId }) => customId === file.customId);
    if (!declared) throw new AppError('invalid', 'This file was not announced. Attach it again.');
    const person = await personById(metadata.personId);
    const scope = await authorise('entry.write', person, metadata.entryId);
    const { ufsUrl } = await api.generateSignedURL(file.key, { expiresIn: 600 });
    return await receiveFile({
      kind,
      notebookId: scope.notebook.id,
      entryId: metadata.entryId,
      personId: metadata.personId,
      uploadId: declared.uploadId,
      fileName: declared.name,
      mediaType: file.type,
      bytes: declared.bytes,
      sha256: declared.sha256,
      content: bytesOf(ufsUrl),
    });
  } catch (error) {
    if (error instanceof AppError) return { error: error.message };
    report('upload could not be received', { kind }, error);
    return {
      error:
        'The file arrived but could not be taken in. It is kept by the upload service; resume the upload to try again.',
    };
  } finally {
    discardLater(file.key);
  }
}

/** The service's copy goes once ours is on disk, after it has passed our answer on. */
function discardLater(key: string): void {
  const timer = setTimeout(() => {
    uploadApi()
      .deleteFiles(key)
      .catch((error: unknown) => report('a received file stays with the upload service', {}, error));
  }, 20_000);
  timer.unref();
}

const f = createUploadthing({ errorFormatter: (error) => ({ message: error.message }) });
const routeOptions = {
  awaitServerData: true,
  getFileHashParts: (file: { customId?: string | null; name: string; size: number }) => [
    file.customId,
    file.name,
    file.size,
  ],
};

function slug(kind: 'trace' | 'picture') {
  return f({ blob: { maxFileSize: '256MB', maxFileCount: 20 } }, routeOptions)
    .input(uploadInputSchema)
    .middleware(async ({ req, input, files }) => {
      try {
        return await begin(kind, req, input, files);
      } catch (error) {
        throw asUploadError(error);
      }
    })
    .onUploadComplete(({ metadata, file }) => complete(kind, metadata, file));
}

export const uploadRouter = { trace: slug('trace'), picture: slug('picture') } satisfies FileRouter;
export type UploadRouter = typeof uploadRouter;
