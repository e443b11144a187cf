import { randomUUID, scryptSync } from 'node:crypto';
import fs from 'node:fs/promises';
import os from 'node:os';
import path from 'node:path';
import { Client } from 'pg';
import type { NotebookRole } from '@/lib/schemas/person';
import { POST as signInRoute } from '@/app/api/auth/sign-in/route';
import { createAccount } from '@/server/accounts/service';
import { closeDatabase, getDb } from '@/server/db/client';
import { notebookMember } from '@/server/db/schema/notebooks';
import { forgetEnv } from '@/server/env/env';
import { insertNotebook } from '@/server/notebooks/service';

export const origin = 'http://localhost:3999';
/** Read once: each laboratory then sets its own database's address. */
const serverUrl = process.env.DATABASE_URL;
export const password = 'a long enough password';

/** The stored form of `password` at a 96th of the usual cost, so that a suite full of sign-ins stays quick; the check reads the cost from it. */
export function cheapHash(): string {
  const salt = Buffer.from('salt of the tests');
  const key = scryptSync(password, salt, 32, { N: 1024, r: 8, p: 1 });
  return ['scrypt', 1024, 8, 1, salt.toString('base64url'), key.toString('base64url')].join('$');
}

export type TestPerson = { id: string; name: string; email: string; cookie: string };
type Route = (request: Request, context: { params: Promise<Record<string, string | string[]>> }) => Promise<Response>;
export type CallOptions = {
  as?: TestPerson | null;
  body?: unknown;
  params?: Record<string, string | string[]>;
  headers?: Record<string, string | null>;
  method?: string;
  /** Path and query; only the query matters to most routes. */
  url?: string;
};
export type Answer<T = Record<string, unknown>> = { status: number; body: T; headers: Headers };

/**
 * A laboratory of its own: data folder, migrated database, one notebook NB-01 with a person for every role, an outsider
 * and an administrator. Call `close()` at the end.
 */
export async function startLaboratory(environment: Record<string, string> = {}) {
  const dataDir = await fs.mkdtemp(path.join(os.tmpdir(), 'kelvinleaf-test-'));
  if (serverUrl) process.env.DATABASE_URL = await freshDatabase(serverUrl);
  Object.assign(process.env, { DATA_DIR: dataDir, BASE_URL: origin, DEMO: 'off', ...environment });
  forgetEnv();
  const hash = cheapHash();
  const db = await getDb();
  const make = async (name: string, role: 'member' | 'administrator' = 'member'): Promise<TestPerson> => {
    const email = `${name.toLowerCase().replace(/\W+/g, '.')}@laboratory.example`;
    const id = await db.transaction((tx) =>
      createAccount(tx, { email, name, role, passwordHash: hash, actorId: null }),
    );
    return { id, name, email, cookie: '' };
  };
  const people = {
    lead: await make('Lea Dahl'),
    author: await make('Aron Thorne'),
    second: await make('Sara Contra'),
    witness: await make('Wilma Nesse'),
    reader: await make('Rolf Edder'),
    outsider: await make('Otto Fremd'),
    administrator: await make('Adele Minster', 'administrator'),
  };
  const notebookId = randomUUID();
  await db.transaction(async (tx) => {
    await insertNotebook(tx, {
      id: notebookId,
      code: 'NB-01',
      title: 'Pumps',
      description: '',
      leadId: people.lead.id,
    });
    const members: [TestPerson, NotebookRole][] = [
      [people.author, 'author'],
      [people.second, 'author'],
      [people.witness, 'witness'],
      [people.reader, 'reader'],
    ];
    await tx.insert(notebookMember).values(members.map(([person, role]) => ({ notebookId, userId: person.id, role })));
  });
  for (const person of Object.values(people)) person.cookie = await signIn(person.email);
  return {
    dataDir,
    db,
    people,
    notebookId,
    call,
    close: async () => {
      await closeDatabase();
      await fs.rm(dataDir, { recursive: true, force: true });
    },
  };
}

/** The same suite on a PostgreSQL server: a database of its own for each laboratory. */
async function freshDatabase(url: string): Promise<string> {
  const name = `kelvinleaf_test_${randomUUID().replaceAll('-', '')}`;
  const client = new Client({ connectionString: url });
  await client.connect();
  await client.query(`CREATE DATABASE ${name}`);
  await client.end();
  const own = new URL(url);
  own.pathname = `/${name}`;
  return own.href;
}

export type Laboratory = Awaited<ReturnType<typeof startLaboratory>>;

/** Cookie header after a real sign-in. */
export async function signIn(email: string, withPassword = password): Promise<string> {
  const answer = await signInRoute(
    new Request(`${origin}/api/auth/sign-in`, {
      method: 'POST',
      headers: { origin, 'content-type': 'application/json' },
      body: JSON.stringify({ email, password: withPassword }),
    }),
    { params: Promise.resolve({}) },
  );
  if (!answer.ok) throw new Error(`sign-in of ${email}: ${answer.status} ${await answer.text()}`);
  return answer.headers
    .getSetCookie()
    .map((cookie) => cookie.split(';')[0])
    .join('; ');
}

/** Calls a route handler as a browser page of this origin would. A header given as null is left out. */
export async function call<T = Record<string, unknown>>(route: Route, options: CallOptions = {}): Promise<Answer<T>> {
  const method = options.method ?? (options.body === undefined ? 'GET' : 'POST');
  const headers = new Headers();
  if (method !== 'GET') {
    headers.set('origin', origin);
    headers.set('sec-fetch-site', 'same-origin');
  }
  if (options.as) headers.set('cookie', options.as.cookie);
  if (options.body !== undefined) headers.set('content-type', 'application/json');
  for (const [name, value] of Object.entries(options.headers ?? {})) {
    if (value === null) headers.delete(name);
    else headers.set(name, value);
  }
  const answer = await route(
    new Request(`${origin}${options.url ?? '/api/test'}`, {
      method,
      headers,
      body:
        options.body === undefined
          ? undefined
          : typeof options.body === 'string'
            ? options.body
            : JSON.stringify(options.body),
    }),
    { params: Promise.resolve(options.params ?? {}) },
  );
  const text = await answer.text();
  const isJson = /json/.test(answer.headers.get('content-type') ?? '');
  return { status: answer.status, body: (isJson ? JSON.parse(text) : { text }) as T, headers: answer.headers };
}
