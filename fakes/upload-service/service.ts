import { createReadStream } from 'node:fs';
import { Readable } from 'node:stream';
import type { UploadAddress } from './address';
import { checkReadAddress, readUploadAddress, sameText, sign } from './address';
import type { UploadServiceConfig } from './config';
import { ServiceRefusal } from './config';
import { receiveBody } from './receive';
import type { FileRecord, Registration } from './store';
import { UploadStore } from './store';

/**
 * A local stand-in for the hosted upload service. It speaks the wire protocol of the `uploadthing` packages, version 7.7, so
 * that the application cannot tell which of the two answers. Framework-free: a request in, a response out.
 */

/** Keys that a PUT is being received for, per process; the stand-in lives in one. */
const busy = ((globalThis as { kelvinleafUploadsBusy?: Set<string> }).kelvinleafUploadsBusy ??= new Set<string>());

export async function handleUploadService(request: Request, config: UploadServiceConfig): Promise<Response> {
  try {
    return await dispatch(request, config);
  } catch (error) {
    // A refused body may go on for gigabytes: the connection is closed instead of reading it to its end.
    if (error instanceof ServiceRefusal) return json({ error: error.message }, error.status, request.method === 'PUT');
    console.error('upload service:', error instanceof Error ? error.message : error);
    return json({ error: 'The upload service failed. What arrived is kept; try again.' }, 500);
  }
}

async function dispatch(request: Request, config: UploadServiceConfig): Promise<Response> {
  const url = new URL(request.url);
  const base = new URL(config.baseUrl).pathname.replace(/\/$/, '');
  if (!url.pathname.startsWith(`${base}/`)) throw new ServiceRefusal(404, 'Nothing lies at this address.');
  const path = url.pathname.slice(base.length + 1);
  const store = new UploadStore(config.dataDir);

  if (request.method === 'POST') {
    const given = request.headers.get('x-uploadthing-api-key') ?? '';
    if (!sameText(given, config.apiKey))
      throw new ServiceRefusal(401, 'The key of the application is missing or wrong.');
    const body = await readBody(request);
    switch (path) {
      case 'route-metadata':
        return json(await register(store, body));
      case 'callback-result':
        return json(await takeResult(store, body));
      case 'v6/deleteFiles':
        return json(await deleteFiles(store, body));
      case 'v6/listFiles':
        return json(await listFiles(store, body));
      default:
        throw new ServiceRefusal(404, 'The service does not offer this.');
    }
  }

  const read = /^a\/([^/]+)\/([^/]+)$/.exec(path);
  if (request.method === 'GET' && read) {
    const [, appId, key] = read as unknown as [string, string, string];
    if (appId !== config.appId || !UploadStore.isKey(key))
      throw new ServiceRefusal(404, 'Nothing lies at this address.');
    checkReadAddress(config, key, url.search);
    return serve(store, key);
  }
  if (!UploadStore.isKey(path)) throw new ServiceRefusal(404, 'Nothing lies at this address.');
  if (request.method === 'HEAD') {
    readUploadAddress(config, path, url.search);
    const held = (await store.size(store.file(path))) ?? (await store.size(store.part(path))) ?? 0;
    return new Response(null, { headers: { 'x-ut-range-start': String(held), 'cache-control': 'no-store' } });
  }
  if (request.method === 'PUT') {
    const address = readUploadAddress(config, path, url.search);
    if (busy.has(path))
      throw new ServiceRefusal(
        409,
        'This file is being received already. Wait for it, or resume it when it has broken off.',
      );
    busy.add(path);
    try {
      return json(await receive(config, store, address, request));
    } finally {
      busy.delete(path);
    }
  }
  throw new ServiceRefusal(405, 'The service does not answer this method here.');
}

async function readBody(request: Request): Promise<Record<string, unknown>> {
  const text = await request.text();
  if (text.length > 1 << 20) throw new ServiceRefusal(413, 'The request is too long.');
  let body: unknown;
  try {
    body = JSON.parse(text);
  } catch {
    throw new ServiceRefusal(400, 'The request is no JSON.');
  }
  if (typeof body !== 'object' || body === null || Array.isArray(body))
    throw new ServiceRefusal(400, 'The request is no JSON object.');
  return body as Record<string, unknown>;
}

function keysOf(value: unknown): string[] {
  if (!Array.isArray(value)) return [];
  return value.filter((key): key is string => typeof key === 'string' && UploadStore.isKey(key));
}

async function register(store: UploadStore, body: Record<string, unknown>): Promise<{ ok: boolean }> {
  const { callbackUrl, callbackSlug, metadata, awaitServerData } = body;
  if (typeof callbackUrl !== 'string' || typeof callbackSlug !== 'string') {
    throw new ServiceRefusal(400, 'The registration names no callback.');
  }
  const registration: Registration = {
    metadata,
    callbackUrl,
    callbackSlug,
    awaitServerData: awaitServerData !== false,
  };
  for (const key of keysOf(body.fileKeys)) {
    const known = await store.read(key);
    // A file that the application has acknowledged keeps what it was received with.
    if (known?.acknowledged) continue;
    await store.write({ ...(known ?? emptyRecord(key)), registration });
  }
  return { ok: true };
}

function emptyRecord(key: string): FileRecord {
  return {
    key,
    registration: null,
    address: null,
    uploadedAt: null,
    fileHash: null,
    sha256: null,
    acknowledged: false,
    callbackData: null,
  };
}

async function takeResult(store: UploadStore, body: Record<string, unknown>): Promise<{ ok: boolean }> {
  const key = typeof body.fileKey === 'string' && UploadStore.isKey(body.fileKey) ? body.fileKey : null;
  const record = key ? await store.read(key) : null;
  if (!record) throw new ServiceRefusal(404, 'No such file.');
  if (typeof body.error === 'string') {
    await store.write({ ...record, acknowledged: false, callbackData: { error: body.error } });
  } else {
    await store.write({ ...record, acknowledged: true, callbackData: body.callbackData ?? null });
  }
  return { ok: true };
}

async function deleteFiles(store: UploadStore, body: Record<string, unknown>) {
  const keys = keysOf(body.fileKeys);
  if (Array.isArray(body.customIds)) {
    const wanted = new Set(body.customIds);
    for (const { key, address } of await store.records())
      if (address?.customId && wanted.has(address.customId)) keys.push(key);
  }
  let deletedCount = 0;
  for (const key of keys) if (await store.remove(key)) deletedCount += 1;
  return { success: true, deletedCount };
}

async function listFiles(store: UploadStore, body: Record<string, unknown>) {
  const limit = typeof body.limit === 'number' ? Math.min(500, Math.max(1, body.limit)) : 500;
  const offset = typeof body.offset === 'number' ? Math.max(0, body.offset) : 0;
  const all = (await store.records()).filter(({ address }) => address !== null);
  all.sort((a, b) => (b.uploadedAt ?? 0) - (a.uploadedAt ?? 0) || a.key.localeCompare(b.key));
  const files = all.slice(offset, offset + limit).map(({ key, address, uploadedAt }) => ({
    id: key,
    key,
    customId: address?.customId ?? null,
    name: address?.name ?? '',
    size: address?.size ?? 0,
    status: uploadedAt === null ? ('Uploading' as const) : ('Uploaded' as const),
    uploadedAt: uploadedAt ?? 0,
  }));
  return { hasMore: offset + limit < all.length, files };
}

async function serve(store: UploadStore, key: string): Promise<Response> {
  const size = await store.size(store.file(key));
  if (size === null) throw new ServiceRefusal(404, 'Nothing lies at this address.');
  const stream = Readable.toWeb(createReadStream(store.file(key))) as ReadableStream<Uint8Array>;
  return new Response(stream, {
    headers: {
      'content-type': 'application/octet-stream',
      'content-disposition': 'attachment',
      'content-length': String(size),
      'content-security-policy': "sandbox; default-src 'none'",
      'x-content-type-options': 'nosniff',
      'cache-control': 'private, no-store',
    },
  });
}

async function receive(config: UploadServiceConfig, store: UploadStore, address: UploadAddress, request: Request) {
  const { key, name, size, type, customId } = address;
  const known = await store.read(key);
  if (!known?.registration)
    throw new ServiceRefusal(404, 'The application has not announced this file. Start the upload again.');
  // The key carries only some 31 bits of hash: two uploads may meet in one.
  if (
    known.address &&
    (known.address.customId !== customId || known.address.size !== size || known.address.name !== name)
  ) {
    throw new ServiceRefusal(409, 'Another upload holds this key. Rename the file and start again.');
  }
  if (known.acknowledged) throw new ServiceRefusal(409, 'This file has been received already.');
  let record: FileRecord = { ...known, address: { name, size, type, customId } };
  if ((await store.size(store.file(key))) === null) {
    await store.write(record);
    const { md5, sha256 } = await receiveBody(config, store, address, request);
    await store.complete(key);
    record = { ...record, uploadedAt: Date.now(), fileHash: md5, sha256 };
    await store.write(record);
  }
  // Reached again when the server stopped between storing and the application's answer: only the callback is repeated.
  const serverData = await callBack(config, store, record);
  const ufsUrl = `${config.baseUrl}/a/${config.appId}/${key}`;
  return { url: ufsUrl, appUrl: ufsUrl, ufsUrl, fileHash: record.fileHash, sha256: record.sha256, serverData };
}

async function callBack(config: UploadServiceConfig, store: UploadStore, record: FileRecord): Promise<unknown> {
  const { key, registration, address } = record;
  if (!registration || !address)
    throw new ServiceRefusal(500, 'The registration of this file is lost. Start the upload again.');
  const ufsUrl = `${config.baseUrl}/a/${config.appId}/${key}`;
  const payload = JSON.stringify({
    status: 'uploaded',
    metadata: registration.metadata ?? {},
    origin: config.baseUrl,
    file: {
      ...address,
      key,
      lastModified: record.uploadedAt,
      url: ufsUrl,
      appUrl: ufsUrl,
      ufsUrl,
      fileHash: record.fileHash,
    },
  });
  const target = new URL(registration.callbackUrl);
  target.searchParams.set('slug', registration.callbackSlug);
  const failed =
    'The file arrived and is kept, but the application did not take it in. Resume the upload to try again.';
  let answer: Response;
  try {
    answer = await fetch(target, {
      method: 'POST',
      headers: {
        'content-type': 'application/json',
        'uploadthing-hook': 'callback',
        'x-uploadthing-signature': sign(config.apiKey, payload),
      },
      body: payload,
      signal: AbortSignal.timeout(config.callbackMs),
    });
  } catch (error) {
    console.error('upload service: callback failed:', error instanceof Error ? error.message : error);
    throw new ServiceRefusal(502, failed);
  }
  if (!answer.ok) throw new ServiceRefusal(502, failed);
  await answer.arrayBuffer();
  if (!registration.awaitServerData) return null;
  // The application posts its result before or shortly after it answers the callback.
  const until = Date.now() + config.callbackMs;
  for (;;) {
    const current = await store.read(key);
    if (current?.acknowledged) return current.callbackData;
    // The application may take its copy and delete ours before we look.
    if (!current) return null;
    if (Date.now() > until) throw new ServiceRefusal(502, failed);
    await new Promise((resolve) => setTimeout(resolve, 25));
  }
}

function json(body: object, status = 200, close = false): Response {
  return Response.json(body, {
    status,
    headers: {
      'cache-control': 'no-store',
      'x-content-type-options': 'nosniff',
      ...(close ? { connection: 'close' } : {}),
    },
  });
}
