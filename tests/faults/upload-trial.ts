import { createHash } from 'node:crypto';
import { mkdtemp, rm } from 'node:fs/promises';
import http from 'node:http';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { createRouteHandler, createUploadthing, UTApi, UTFiles } from 'uploadthing/server';
import type { UploadServiceConfig } from '@/fakes/upload-service/config';
import { serveOnLoopback } from '@/fakes/upload-service/loopback';
import { handleUploadService } from '@/fakes/upload-service/service';

/** The stand-in and the real server SDK on one loopback port, with a client that sends what a test tells it to. */

export type Received = { key: string; name: string; size: number; customId: string | null; sha256: string };
type Presigned = { url: string; key: string; name: string; customId: string | null };

export const sha256 = (bytes: Uint8Array) => createHash('sha256').update(bytes).digest('hex');

/** Bytes that repeat nowhere soon, the same in every run. */
export function someBytes(length: number): Buffer {
  const bytes = Buffer.alloc(length);
  let state = 7;
  for (let i = 0; i < length; i += 1) {
    state = (state * 48271) % 2147483647;
    bytes[i] = state & 255;
  }
  return bytes;
}

const apiKey = 'sk_local_trial';
const appId = 'kelvinleaf';

export async function startTrial(given: Partial<UploadServiceConfig> & { dataDir?: string } = {}) {
  const dataDir = given.dataDir ?? (await mkdtemp(path.join(tmpdir(), 'uploads-')));
  const received: Received[] = [];
  let answer: () => { [key: string]: string | boolean } = () => ({ taken: true });
  let config: UploadServiceConfig | null = null;
  let route: ((request: Request) => Promise<Response>) | null = null;
  let utapi: UTApi | null = null;

  const server = await serveOnLoopback(async (request, origin) => {
    setUp(origin);
    const { pathname } = new URL(request.url);
    if (pathname === '/api/uploadthing') return (route as (request: Request) => Promise<Response>)(request);
    return handleUploadService(request, config as UploadServiceConfig);
  });

  function setUp(origin: string) {
    if (config) return;
    const baseUrl = `${origin}/api/local-uploads`;
    config = { dataDir, baseUrl, appId, apiKey, quotaBytes: 1e9, idleMs: 2000, callbackMs: 5000, ...given };
    const token = Buffer.from(JSON.stringify({ apiKey, appId, regions: ['local1'], ingestHost: 'localhost' })).toString(
      'base64',
    );
    const f = createUploadthing();
    const sdk = {
      token,
      ingestUrl: baseUrl,
      apiUrl: baseUrl,
      callbackUrl: `${origin}/api/uploadthing`,
      isDev: false,
      logLevel: 'None' as const,
    };
    utapi = new UTApi({ ...sdk, ...{ ufsHost: baseUrl.replace('http://', ''), ufsAppIdLocation: 'path' } });
    const api = utapi;
    const router = {
      trace: f(
        { blob: { maxFileSize: '256MB', maxFileCount: 10 } },
        {
          getFileHashParts: (file: { customId?: string | null; name: string; size: number }) => [
            file.customId,
            file.name,
            file.size,
          ],
          awaitServerData: true,
        },
      )
        .middleware(({ files }) => ({ [UTFiles]: files.map((file) => ({ ...file, customId: `custom-${file.name}` })) }))
        .onUploadComplete(async ({ file }) => {
          const { ufsUrl } = await api.generateSignedURL(file.key, { expiresIn: 60 });
          const read = await fetch(ufsUrl);
          if (!read.ok) throw new Error(`signed read answered ${read.status}`);
          received.push({
            key: file.key,
            name: file.name,
            size: file.size,
            customId: file.customId,
            sha256: sha256(new Uint8Array(await read.arrayBuffer())),
          });
          return answer();
        }),
    };
    route = createRouteHandler({ router, config: { ...sdk, handleDaemonPromise: 'await' } });
  }
  setUp(server.origin);

  return {
    dataDir,
    received,
    origin: server.origin,
    base: `${server.origin}/api/local-uploads`,
    apiKey,
    utapi: utapi as unknown as UTApi,
    answerWith: (next: typeof answer) => {
      answer = next;
    },
    /** Asks our route for the address of an upload, as the browser does. */
    async presign(name: string, size: number): Promise<Presigned> {
      const response = await fetch(`${server.origin}/api/uploadthing?actionType=upload&slug=trace`, {
        method: 'POST',
        headers: { 'content-type': 'application/json' },
        body: JSON.stringify({ input: null, files: [{ name, size, type: 'text/csv', lastModified: 1 }] }),
      });
      if (!response.ok) throw new Error(`the route answered ${response.status}: ${await response.text()}`);
      const [presigned] = (await response.json()) as [Presigned];
      return presigned;
    },
    async held(url: string): Promise<number> {
      const response = await fetch(url, { method: 'HEAD' });
      return Number(response.headers.get('x-ut-range-start'));
    },
    put: (url: string, bytes: Uint8Array, start = 0) => {
      const form = new FormData();
      form.append('file', new Blob([new Uint8Array(bytes.subarray(start))]), 'file');
      return fetch(url, { method: 'PUT', headers: { range: `bytes=${start}-` }, body: form });
    },
    /** Starts a PUT and lets the connection die after `cut` bytes of the file. */
    async putAndBreak(url: string, bytes: Uint8Array, cut: number, start = 0): Promise<void> {
      const { request } = openPut(url, start);
      request.on('error', () => undefined /* the break is what the test wants */);
      request.write(partHead);
      await new Promise<void>((resolve) => request.write(bytes.subarray(start, start + cut), () => resolve()));
      await new Promise((resolve) => setTimeout(resolve, 150));
      request.destroy();
      await new Promise((resolve) => setTimeout(resolve, 200));
    },
    close: async ({ keep = false } = {}) => {
      await server.close();
      if (!keep) await rm(dataDir, { recursive: true, force: true });
    },
  };
}

export const boundary = 'trial-boundary';
export const partHead = Buffer.from(
  `--${boundary}\r\nContent-Disposition: form-data; name="file"; filename="file"\r\nContent-Type: application/octet-stream\r\n\r\n`,
);
export const partTail = Buffer.from(`\r\n--${boundary}--\r\n`);

/** A raw PUT with a chunked multipart body. */
export function openPut(
  url: string,
  start = 0,
): { request: http.ClientRequest; response: Promise<{ status: number; body: string }> } {
  const request = http.request(url, {
    method: 'PUT',
    headers: {
      'content-type': `multipart/form-data; boundary=${boundary}`,
      range: `bytes=${start}-`,
      'transfer-encoding': 'chunked',
    },
  });
  const response = new Promise<{ status: number; body: string }>((resolve, reject) => {
    request.on('error', reject);
    request.on('response', (incoming) => {
      let body = '';
      incoming.setEncoding('utf8');
      incoming.on('data', (chunk: string) => (body += chunk));
      incoming.on('end', () => resolve({ status: incoming.statusCode ?? 0, body }));
      incoming.on('error', reject);
    });
  });
  // A test that breaks the connection off does not wait for the answer.
  response.catch(() => undefined);
  return { request, response };
}
