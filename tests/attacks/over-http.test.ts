import { spawn, type ChildProcess } from 'node:child_process';
import { randomUUID } from 'node:crypto';
import fs from 'node:fs';
import http from 'node:http';
import path from 'node:path';
import { eq } from 'drizzle-orm';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { closeDatabase, openDatabase } from '@/server/db/client';
import { entryDraft } from '@/server/db/schema/entries';
import { forgetEnv } from '@/server/env/env';
import { temporaryFolder } from '../integration/temporary';

/** The cases that only the whole server can answer for: the built application on a port of its own, with the demo data. */

const port = 3955;
const base = `http://localhost:${port}`;
let server: ChildProcess;
let dataDir: string;
let output = '';
const exited = { code: undefined as number | null | undefined };

type Reply = { status: number; headers: http.IncomingHttpHeaders; body: string };

/** One request, its path and headers sent exactly as given. */
function send(
  method: string,
  target: string,
  headers: Record<string, string> = {},
  body?: string | ((request: http.ClientRequest) => void),
): Promise<Reply> {
  return new Promise((resolve, reject) => {
    const request = http.request(
      { host: '127.0.0.1', port, method, path: target, headers, agent: false },
      (incoming) => {
        let text = '';
        incoming.setEncoding('utf8');
        incoming.on('data', (chunk: string) => (text += chunk));
        incoming.on('end', () => resolve({ status: incoming.statusCode ?? 0, headers: incoming.headers, body: text }));
        incoming.on('error', reject);
      },
    );
    request.on('error', reject);
    if (typeof body === 'function') body(request);
    else request.end(body);
  });
}
function write(method: string, target: string, body: unknown, headers: Record<string, string> = {}): Promise<Reply> {
  const text = JSON.stringify(body);
  const own = {
    host: `localhost:${port}`,
    origin: base,
    'content-type': 'application/json',
    'content-length': String(Buffer.byteLength(text)),
  };
  return send(method, target, { ...own, ...headers }, text);
}
const cookieOf = (reply: Reply) => (reply.headers['set-cookie'] ?? []).map((cookie) => cookie.split(';')[0]).join('; ');
async function signIn(name: string, headers: Record<string, string> = {}): Promise<string> {
  const reply = await write(
    'POST',
    '/api/auth/sign-in',
    { email: `${name}@fjordheim.example`, password: 'cold-finger-demo' },
    headers,
  );
  if (reply.status !== 200) throw new Error(`${reply.status} ${reply.body}`);
  return cookieOf(reply);
}

let tomas: string;
let ada: string;
/** Something of the notebook that a stranger must not see. */
let secret: { id: string; title: string };
let draftId: string;
let traceId: string;

beforeAll(async () => {
  dataDir = await temporaryFolder('http');
  server = spawn(process.execPath, ['server/commands/start.mjs'], {
    env: {
      ...process.env,
      PORT: String(port),
      BASE_URL: base,
      DATA_DIR: dataDir,
      DEMO: 'on',
      DATABASE_URL: '',
      NODE_ENV: 'production',
    },
    stdio: ['ignore', 'pipe', 'pipe'],
  });
  for (const stream of [server.stdout, server.stderr]) stream?.on('data', (chunk) => (output += String(chunk)));
  server.on('exit', (code) => (exited.code = code));
  const deadline = Date.now() + 560_000;
  for (;;) {
    const reply = await send('GET', '/api/session').catch(() => null);
    if (reply?.status === 200) break;
    if (exited.code !== undefined || Date.now() > deadline) throw new Error(`the server did not start: ${output}`);
    await new Promise((resolve) => setTimeout(resolve, 300));
  }
  tomas = await signIn('tomas');
  ada = await signIn('ada');
  const { entries } = JSON.parse((await send('GET', '/api/notebooks/NB-03/entries', { cookie: tomas })).body) as {
    entries: { id: string; title: string; state: string; author: { name: string } }[];
  };
  const read = async (id: string) =>
    JSON.parse((await send('GET', `/api/entries/${id}`, { cookie: tomas })).body) as {
      may: { write: boolean };
      traces: { id: string }[];
    };
  for (const entry of entries) {
    const { may, traces } = await read(entry.id);
    if (may.write) draftId ??= entry.id;
    if (traces.length > 0) {
      traceId ??= traces[0].id;
      secret ??= entry;
    }
  }
  expect([draftId, traceId]).not.toContain(undefined);
}, 600_000);
afterAll(async () => {
  if (exited.code === undefined) server.kill('SIGKILL');
  await fs.promises.rm(dataDir, { recursive: true, force: true });
});

const folders = (root: string, leaf: string) =>
  fs
    .readdirSync(root, { recursive: true, encoding: 'utf8' })
    .filter((file) => path.basename(file) === leaf)
    .map((file) => path.dirname(file));
const fill = (folder: string) =>
  folder
    .split('/')
    .filter((part) => !part.startsWith('('))
    .map((part) =>
      part
        .replace('[code]', 'NB-03')
        .replace('[id]', secret.id)
        .replace('[seq]', '1')
        .replace('[index]', '0')
        .replace(/\[.*\]/, 'x'),
    )
    .join('/');
const pages = () => folders('app/(book)', 'page.tsx').map((folder) => `/${fill(folder)}`.replace(/\/\.?$/, '') || '/');

/** Words that only somebody inside may read. */
function expectNothing(reply: Reply, what: string): void {
  for (const word of [secret.title, 'Fjordheim Cryo', 'GA1-B3', 'Tern 24'])
    expect([what, reply.body.includes(word)]).toEqual([what, false]);
}

describe('15 without a session', () => {
  it('15 every page leads to the sign-in page, also for the router’s own requests', async () => {
    expect(pages().length).toBeGreaterThan(20);
    for (const page of pages()) {
      const reply = await send('GET', page, { host: `localhost:${port}` });
      expect([page, reply.status]).toEqual([page, 307]);
      expect(reply.headers.location).toMatch(/^\/sign-in\?to=/);
      for (const headers of [
        { rsc: '1' },
        { rsc: '1', 'next-router-prefetch': '1' },
        { 'next-action': 'a'.repeat(42), origin: base },
      ]) {
        const inner = await send('next-action' in headers ? 'POST' : 'GET', `${page}?_rsc=abcde`, headers as never);
        expectNothing(inner, `${page} ${JSON.stringify(headers)}`);
      }
    }
  });

  it('15 every route answers 401, except those that are open', async () => {
    const open = /^(auth\/|session|mailbox$|uploadthing$|local-uploads)/;
    for (const folder of folders('app/api', 'route.ts')) {
      if (open.test(folder)) continue;
      const source = fs.readFileSync(path.join('app/api', folder, 'route.ts'), 'utf8');
      for (const method of ['GET', 'POST', 'PUT', 'PATCH', 'DELETE']) {
        if (!source.includes(`export const ${method} =`)) continue;
        const target = `/api/${fill(folder)}`;
        const reply = await (method === 'GET' ? send('GET', target) : write(method, target, {}));
        expect([method, target, reply.status]).toEqual([method, target, 401]);
      }
    }
  });

  it('15, 30 the upload routes begin nothing', async () => {
    const reply = await write('POST', '/api/uploadthing?actionType=upload&slug=trace', {
      input: { entryId: draftId, files: [{ uploadId: 'x'.repeat(20), sha256: '0'.repeat(64) }] },
      files: [{ name: 'a.csv', size: 3, type: 'text/csv', lastModified: 1 }],
    });
    expect(reply.status).toBe(403);
    expect([403, 404]).toContain((await send('GET', '/api/local-uploads/a/kelvinleaf/anything')).status);
  });
});

it('16 headers that the framework uses inside itself open nothing', async () => {
  const chain = (name: string) => Array(5).fill(name).join(':');
  const hostile: Record<string, string>[] = [
    ...['proxy', 'src/proxy', 'middleware', 'src/middleware', 'pages/_middleware'].map((name) => ({
      'x-middleware-subrequest': chain(name),
    })),
    { 'x-middleware-next': '1' },
    { 'x-middleware-rewrite': `/entries/${secret.id}` },
    { 'x-nextjs-data': '1' },
    { 'x-invoke-path': `/entries/${secret.id}`, 'x-invoke-status': '200' },
    { 'x-matched-path': '/entries/[id]' },
    { 'x-now-route-matches': `1=${secret.id}` },
    { 'x-original-url': '/sign-in', 'x-rewrite-url': '/sign-in' },
    { 'x-prerender-revalidate': 'x' },
    { authorization: 'Bearer x', 'x-user-id': 'tomas' },
  ];
  for (const headers of hostile) {
    for (const target of [`/entries/${secret.id}`, '/notebooks/NB-03', '/administration']) {
      const reply = await send('GET', target, headers);
      expect([JSON.stringify(headers), target, reply.status === 200]).toEqual([JSON.stringify(headers), target, false]);
      expectNothing(reply, JSON.stringify(headers));
    }
    expect((await send('GET', '/api/notebooks', headers)).status).toBe(401);
  }
});

it('17 encoded, doubled, dotted and case-changed paths open nothing', async () => {
  const id = secret.id;
  for (const target of [
    `//entries/${id}`,
    `/entries//${id}`,
    `/ENTRIES/${id}`,
    `/entries/${id.toUpperCase()}`,
    `/%65ntries/${id}`,
    `/entries%2f${id}`,
    `/entries/%2e%2e/entries/${id}`,
    `/sign-in/../entries/${id}`,
    `/_next/../entries/${id}`,
    `/_next/static/../../entries/${id}`,
    `/_next/data/x/entries/${id}.json`,
    `/entries/${id}.json`,
    `/entries/${id}.rsc`,
    `/entries/${id}/`,
    `/entries/${id}%00`,
    `/entries/${id};x=1`,
    `/entries/${id}\\..\\x`,
    `/api//entries/${id}`,
    `/API/entries/${id}`,
    `/api/entries/${id}/.`,
    `/%61pi/entries/${id}`,
    `/api/auth/../entries/${id}`,
    `/api/auth/%2e%2e/entries/${id}`,
    `/api/session/..%2fentries%2f${id}`,
    '/api/local-uploads/..%2f..%2fsecrets.json',
    '/api/local-uploads/%2e%2e/%2e%2e/secrets.json',
    '/_next/static/..%2f..%2f..%2fpackage.json',
    '/..%2fpackage.json',
    '/.git/config',
    '/.env',
  ]) {
    const reply = await send('GET', target);
    // The router's own form of an answer is a 200 that leads to the sign-in page.
    const leadsAway = /NEXT_REDIRECT;[^"]*\/sign-in/.test(reply.body);
    expect([target, reply.status !== 200 || leadsAway]).toEqual([target, true]);
    expectNothing(reply, target);
    expect(reply.body).not.toContain('"session"');
    expect(reply.body).not.toContain('"dependencies"');
  }
});

it('18 what names the resource is the path: a query cannot put another id in its place', async () => {
  const other = randomUUID();
  for (const query of [`id=${secret.id}`, `nxtPid=${secret.id}`, `params[id]=${secret.id}`, `nxtIid=${secret.id}`]) {
    for (const cookie of [tomas, ada]) {
      expect((await send('GET', `/api/entries/${other}?${query}`, { cookie })).status).toBe(404);
      const page = await send('GET', `/entries/${other}?${query}`, { cookie });
      expect([query, page.status]).toEqual([query, 404]);
      expectNothing(page, query);
    }
    // And one's own id in the query does not stand for another's in the path.
    expect((await send('GET', `/api/entries/${secret.id}?id=${other}`, { cookie: ada })).status).toBe(404);
  }
  expect((await send('GET', '/api/notebooks/NB-99/entries?code=NB-03', { cookie: tomas })).status).toBe(404);
});

it('3 a planted cookie is not taken over by a sign-in', async () => {
  const mine = await signIn('oskar', { cookie: 'kelvinleaf=planted.AAAA' });
  expect(mine).not.toContain('planted');
  expect((await send('GET', '/api/notebooks', { cookie: 'kelvinleaf=planted.AAAA' })).status).toBe(401);
  expect((await send('GET', '/api/notebooks', { cookie: mine })).status).toBe(200);
});

it('22 a method named beside the real one is not taken, HEAD is no way round, and others are refused', async () => {
  const before = (await send('GET', `/api/entries/${draftId}`, { cookie: tomas })).body;
  const overrides: Record<string, string>[] = [
    { 'x-http-method-override': 'DELETE' },
    { 'x-method-override': 'PUT' },
    { 'x-http-method': 'PATCH' },
  ];
  for (const headers of overrides) {
    const over = await send('GET', `/api/entries/${draftId}?_method=PUT`, { cookie: tomas, ...headers });
    expect(over.status).toBe(200);
    expect((await write('POST', `/api/entries/${draftId}`, {}, { cookie: tomas, ...headers })).status).toBe(405);
  }
  for (const method of ['DELETE', 'PATCH', 'PROPFIND'])
    expect([method, (await send(method, `/api/entries/${draftId}`, { cookie: tomas, origin: base })).status]).toEqual([
      method,
      expect.toSatisfy((status: number) => status === 405 || status === 400),
    ]);
  expect((await send('HEAD', `/api/entries/${secret.id}`)).status).toBe(401);
  expect((await send('HEAD', `/api/entries/${secret.id}`, { cookie: ada })).status).toBe(404);
  const head = await send('HEAD', `/api/entries/${secret.id}`, { cookie: tomas });
  expect([head.status, head.body]).toEqual([200, '']);
  expect((await send('HEAD', `/entries/${secret.id}`)).status).toBe(307);
  expect((await send('GET', `/api/entries/${draftId}`, { cookie: tomas })).body).toBe(before);
});

it('58 a hostile Host or forwarded host appears in no address, and does not make a foreign Origin ours', async () => {
  const hostile = { host: 'evil.example', 'x-forwarded-host': 'evil.example', 'x-forwarded-proto': 'https' };
  for (const target of ['/', `/entries/${secret.id}`, '/sign-in', '/nothing-here', '/notebooks/']) {
    const reply = await send('GET', target, hostile);
    expect([target, JSON.stringify(reply.headers).includes('evil'), reply.body.includes('evil.example')]).toEqual([
      target,
      false,
      false,
    ]);
  }
  const forged = await write(
    'POST',
    '/api/auth/sign-in',
    { email: 'tomas@fjordheim.example', password: 'cold-finger-demo' },
    { ...hostile, origin: 'https://evil.example' },
  );
  expect(forged.status).toBe(403);
  expect(forged.headers['set-cookie']).toBeUndefined();
});

describe('60 the content security policy', () => {
  const strict = (policy: string) => policy.includes("default-src 'none'") && policy.includes('sandbox');

  it('60 stands on pages and on error pages, with a nonce that is new each time', async () => {
    const nonces = new Set<string>();
    for (const [target, cookie, status] of [
      ['/sign-in', '', 200],
      [`/entries/${secret.id}`, tomas, 200],
      [`/entries/${randomUUID()}`, tomas, 404],
      ['/nothing-here', '', 404],
      ['/nothing/here', tomas, 404],
    ] as const) {
      const reply = await send('GET', target, cookie ? { cookie } : {});
      expect([target, reply.status]).toEqual([target, status]);
      const policy = String(reply.headers['content-security-policy']);
      for (const part of ["object-src 'none'", "base-uri 'none'", "frame-ancestors 'none'", "default-src 'self'"])
        expect([target, policy]).toEqual([target, expect.stringContaining(part)]);
      expect(policy).not.toMatch(/unsafe-eval|script-src[^;]*unsafe-inline/);
      const nonce = /'nonce-([^']+)'/.exec(policy)?.[1] ?? '';
      expect(nonce.length).toBeGreaterThan(20);
      nonces.add(nonce);
      for (const [, attributes] of reply.body.matchAll(/<script([^>]*)>/g))
        expect(attributes).toContain(`nonce="${nonce}"`);
    }
    expect(nonces.size).toBe(5);
  });

  it('60 stands on answers and errors of the API and on downloads, which are attachments', async () => {
    const file = await send('GET', `/api/traces/${traceId}/file`, { cookie: tomas });
    expect(file.status).toBe(200);
    expect(file.headers).toMatchObject({
      'content-type': 'application/octet-stream',
      'content-disposition': expect.stringMatching(/^attachment/),
      'x-content-type-options': 'nosniff',
    });
    for (const [target, cookie] of [
      [`/api/traces/${traceId}/file`, tomas],
      ['/api/session', ''],
      [`/api/entries/${randomUUID()}`, tomas],
      [`/api/entries/${secret.id}`, ''],
      ['/api/nothing-here', ''],
      ['/api/local-uploads/none', ''],
      ['/api/uploadthing', ''],
    ]) {
      const reply = await send('GET', target, cookie ? { cookie } : {});
      expect([target, strict(String(reply.headers['content-security-policy']))]).toEqual([target, true]);
      expect([target, reply.headers['x-content-type-options']]).toEqual([target, expect.stringContaining('nosniff')]);
    }
  });
});

it('72, 73 names and titles that are markup are shown as text, in the page and in the state sent with it', async () => {
  const markup = '</script><script>window.broken=1</script><img src=x onerror=alert(1)>';
  const made = await write(
    'POST',
    '/api/notebooks/NB-03/entries',
    {
      title: markup,
      workDate: '2026-11-20',
      cooldownId: null,
      deviceIds: [],
      layout: 'empty',
      requestKey: randomUUID(),
    },
    { cookie: tomas },
  );
  const { id } = JSON.parse(made.body) as { id: string };
  const device = { lot: '', wafer: '', die: '', material: '<b>GaAs</b>', dimensions: '', remarks: markup, gates: [] };
  const named = { name: '<img src=x onerror=alert(1)>', ...device };
  const kept = await write('POST', '/api/notebooks/NB-03/devices', named, { cookie: tomas });
  expect([made.status, kept.status]).toEqual([200, 200]);
  for (const target of [`/entries/${id}`, '/notebooks/NB-03', '/', '/devices', `/entries/${id}/versions`]) {
    const reply = await send('GET', target, { cookie: tomas });
    expect([target, reply.status]).toEqual([target, 200]);
    expect([target, reply.body.includes('<script>window.broken'), /<img src=x/.test(reply.body)]).toEqual([
      target,
      false,
      false,
    ]);
    expect(reply.body).not.toContain('<b>GaAs</b>');
  }
  const [list, devices] = [
    await send('GET', '/notebooks/NB-03', { cookie: tomas }),
    await send('GET', '/devices', { cookie: tomas }),
  ];
  expect(list.body).toContain('&lt;img src=x');
  expect(devices.body).toContain('&lt;img src=x');
});

it('106 no page of an error carries a stack or a path of the server', async () => {
  for (const target of ['/nothing-here', '/%E0%A4%A', '/entries/%00', '/api/nothing-here', '/api/find?q=%E0%A4%A']) {
    const reply = await send('GET', target, { cookie: tomas });
    expect([target, reply.status < 500]).toEqual([target, true]);
    expect(reply.body).not.toMatch(/node_modules|\bat \w+ \(|\/server\/\w+\/\w+\.ts/);
  }
  expect(output).not.toContain('cold-finger-demo"');
});

it('21 SIGTERM: what was let in is answered and kept, nothing new is let in, and the server ends by itself', async () => {
  const before = JSON.parse((await send('GET', `/api/entries/${draftId}/draft`, { cookie: tomas })).body) as {
    revision: number;
    title: string;
  };
  const body = JSON.stringify({
    basedOn: before.revision,
    title: 'Kept through the end',
    doc: {
      type: 'doc',
      content: [
        { type: 'paragraph', attrs: { id: 'last_words' }, content: [{ type: 'text', text: 'Still in time.' }] },
      ],
    },
    written: {},
    clockOffsetMs: 0,
    saveId: randomUUID(),
  });
  const headers = {
    host: `localhost:${port}`,
    origin: base,
    cookie: tomas,
    'content-type': 'application/json',
    'content-length': String(Buffer.byteLength(body)),
  };
  const late: Promise<Reply | null>[] = [];
  const underWay = send('PUT', `/api/entries/${draftId}/draft`, headers, (request) => {
    request.write(body.slice(0, 40));
    setTimeout(() => server.kill('SIGTERM'), 500);
    setTimeout(() => late.push(send('GET', '/api/notebooks', { cookie: tomas }).catch(() => null)), 1200);
    setTimeout(() => request.end(body.slice(40)), 1800);
  });
  const reply = await underWay;
  expect(reply.status).toBe(200);
  // Refused by a sentence, or the door is closed already.
  for (const answer of await Promise.all(late)) expect([undefined, 503]).toContain(answer?.status);
  const deadline = Date.now() + 25_000;
  while (exited.code === undefined && Date.now() < deadline) await new Promise((resolve) => setTimeout(resolve, 100));
  expect(exited.code).toBe(0);
  // Closed in order: no trace of a crash, and the save is in the database.
  expect(fs.existsSync(path.join(dataDir, 'running.json'))).toBe(false);
  Object.assign(process.env, { DATA_DIR: dataDir, BASE_URL: base, DATABASE_URL: '' });
  forgetEnv();
  const { db, report } = await openDatabase();
  expect(report).toEqual({ replayed: 0, restoredCopy: null, reason: null });
  const [row] = await db.select().from(entryDraft).where(eq(entryDraft.entryId, draftId));
  expect(row).toMatchObject({ revision: before.revision + 1, title: 'Kept through the end' });
  await closeDatabase();
}, 60_000);
