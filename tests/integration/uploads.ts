import { createHash, randomUUID } from 'node:crypto';
import { execFile } from 'node:child_process';
import { promisify } from 'node:util';
import { handleUploadService } from '@/fakes/upload-service/service';
import { serveOnLoopback } from '@/fakes/upload-service/loopback';
import { POST as createEntry } from '@/app/api/notebooks/[code]/entries/route';
import type { UploadOutcome } from '@/lib/schemas/upload';
import { forgetEnv } from '@/server/env/env';
import { forgetUploads, handleUploads, localServiceConfig } from '@/server/uploads/service';
import { call, type Laboratory, startLaboratory, type TestPerson } from './harness';

/** A laboratory whose upload routes answer on a loopback port, so that files travel over the real wire protocol. */
export async function startUploads() {
  await promisify(execFile)('node', ['server/commands/build-workers.mjs']);
  const server = await serveOnLoopback(async (request) => {
    if (new URL(request.url).pathname === '/api/uploadthing') return handleUploads(request);
    const config = localServiceConfig();
    if (!config) throw new Error('no local service');
    return handleUploadService(request, config);
  });
  const laboratory = await startLaboratory();
  // People have signed in at the harness's own address; from here on the installation answers at the loopback port.
  process.env.BASE_URL = server.origin;
  forgetEnv();
  forgetUploads();
  return {
    ...laboratory,
    origin: server.origin,
    close: async () => {
      await server.close();
      await laboratory.close();
    },
  };
}

export type Uploads = Awaited<ReturnType<typeof startUploads>>;

export const digestOf = (bytes: Uint8Array) => createHash('sha256').update(bytes).digest('hex');

export async function newEntry(
  laboratory: Pick<Laboratory, 'people'> & { origin: string },
  as: TestPerson = laboratory.people.author,
): Promise<string> {
  const made = await call<{ id: string }>(createEntry, {
    as,
    params: { code: 'NB-01' },
    headers: { origin: laboratory.origin },
    body: {
      title: 'Scan',
      workDate: '2031-03-04',
      cooldownId: null,
      deviceIds: [],
      layout: 'cooldown-day',
      requestKey: randomUUID(),
    },
  });
  if (made.status !== 200) throw new Error(`entry: ${made.status} ${JSON.stringify(made.body)}`);
  return made.body.id;
}

export type Sent = { status: number; message?: string; outcome?: UploadOutcome };

/** Sends one file as the browser does: address, then bytes. */
export async function sendFile(
  uploads: { origin: string },
  as: TestPerson | null,
  entryId: string,
  name: string,
  bytes: Uint8Array,
  options: {
    slug?: 'trace' | 'picture';
    sha256?: string;
    uploadId?: string;
    size?: number;
    type?: string;
    headers?: Record<string, string>;
  } = {},
): Promise<Sent> {
  const {
    slug = 'trace',
    sha256 = digestOf(bytes),
    uploadId = randomUUID(),
    size = bytes.length,
    type = 'text/csv',
  } = options;
  const begin = await fetch(`${uploads.origin}/api/uploadthing?actionType=upload&slug=${slug}`, {
    method: 'POST',
    headers: {
      'content-type': 'application/json',
      origin: uploads.origin,
      ...(as ? { cookie: as.cookie } : {}),
      ...options.headers,
    },
    body: JSON.stringify({
      input: { entryId, files: [{ uploadId, sha256 }] },
      files: [{ name, size, type, lastModified: 1 }],
    }),
  });
  const answer = (await begin.json()) as { message?: string; error?: { message: string } } | [{ url: string }];
  if (!begin.ok || !Array.isArray(answer)) {
    const refused = answer as { message?: string; error?: { message: string } };
    return { status: begin.status, message: refused.message ?? refused.error?.message };
  }
  const form = new FormData();
  form.append('file', new Blob([new Uint8Array(bytes)]), 'file');
  const put = await fetch(answer[0].url, { method: 'PUT', headers: { range: 'bytes=0-' }, body: form });
  const body = (await put.json()) as { error?: string; serverData?: UploadOutcome };
  return { status: put.status, message: body.error, outcome: body.serverData };
}
