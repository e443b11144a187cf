import fs from 'node:fs/promises';
import os from 'node:os';
import path from 'node:path';
import { drizzle } from 'drizzle-orm/pglite';
import { migrate } from 'drizzle-orm/pglite/migrator';
import { eq } from 'drizzle-orm';
import { afterAll, afterEach, beforeAll, describe, expect, it } from 'vitest';
import { closeDatabase, openDatabase } from '@/server/db/client';
import { closeEmbedded, openEmbedded, type JournaledPGlite } from '@/server/db/embedded';
import { setting } from '@/server/db/schema/housekeeping';
import { forgetEnv } from '@/server/env/env';
import { bundle, start } from './child';

/** What happens to the embedded database's folder when the machine, the disk or a person is unkind to it. */

let root: string;
let base: string;
let count = 0;

async function open(dataDir: string) {
  Object.assign(process.env, { DATA_DIR: dataDir, DEMO: 'off', BASE_URL: 'http://localhost:3999' });
  forgetEnv();
  return openDatabase();
}
const put = async (key: string, value: unknown) =>
  (await openDatabase()).db
    .insert(setting)
    .values({ key, value })
    .onConflictDoUpdate({ target: setting.key, set: { value } });
const get = async (key: string) =>
  (await (await openDatabase()).db.select().from(setting).where(eq(setting.key, key)))[0]?.value;

/** A folder with one acknowledged setting, closed; every case works on a copy of its own. */
async function folder(): Promise<string> {
  const dataDir = path.join(root, `case-${(count += 1)}`);
  await fs.cp(base, dataDir, { recursive: true });
  return dataDir;
}
const journalFiles = async (dataDir: string) =>
  (await fs.readdir(path.join(dataDir, 'journal'))).sort().map((name) => path.join(dataDir, 'journal', name));
/** Puts the database back to what it was in the base folder, as a disk that lost its last writes; the journal stays. */
async function rollBack(dataDir: string): Promise<void> {
  await fs.rm(path.join(dataDir, 'pg'), { recursive: true });
  await fs.cp(path.join(base, 'pg'), path.join(dataDir, 'pg'), { recursive: true });
}

beforeAll(async () => {
  root = await fs.mkdtemp(path.join(os.tmpdir(), 'kelvinleaf-folder-'));
  base = path.join(root, 'base');
  await open(base);
  await put('first', 1);
  await closeDatabase();
});
afterEach(() => closeDatabase());
afterAll(() => fs.rm(root, { recursive: true, force: true }));

describe('a power cut', () => {
  it('after which the database is older than what was acknowledged: the journal is replayed and nothing is missing', async () => {
    const dataDir = await folder();
    await open(dataDir);
    for (let i = 0; i < 20; i += 1) await put(`later ${i}`, i);
    await put('first', 'changed');
    await closeDatabase();
    await rollBack(dataDir);
    const { report } = await open(dataDir);
    expect(report).toMatchObject({ replayed: 21, restoredCopy: null });
    expect(await get('first')).toBe('changed');
    for (let i = 0; i < 20; i += 1) expect(await get(`later ${i}`)).toBe(i);
    // And it goes on from there.
    await put('after', true);
    await closeDatabase();
    expect((await open(dataDir)).report.replayed).toBe(0);
    expect(await get('after')).toBe(true);
  });

  it('is told of at the start and on the administration page', async () => {
    const dataDir = await folder();
    await open(dataDir);
    for (let i = 0; i < 3; i += 1) await put(`later ${i}`, i);
    await closeDatabase();
    await rollBack(dataDir);
    const child = start(await bundle('starting-program'), dataDir);
    const noted = JSON.parse(await child.line('recovery')) as { sentence: string };
    expect(noted.sentence).toBe(
      '3 changes that the database did not hold were taken from the journal. Nothing that was acknowledged is missing.',
    );
    expect(child.lines).toContain(noted.sentence);
    child.process.kill('SIGTERM');
    expect((await child.ended).code).toBe(0);
  });

  it('of the machine while the database was open: the newest copy takes its place, since files may be torn', async () => {
    const dataDir = await folder();
    const opened = await open(dataDir);
    await put('before the copy', 1);
    await opened.maintain();
    await put('after the copy', 2);
    await closeDatabase();
    await fs.writeFile(path.join(dataDir, 'running.json'), JSON.stringify({ boot: 'another-boot', pid: 1 }));
    // Torn beyond what PostgreSQL would notice at the start: only the copy can help.
    await fs.rm(path.join(dataDir, 'pg', 'base'), { recursive: true });
    const { report } = await open(dataDir);
    expect(report.restoredCopy).toMatch(/^\d{12}$/);
    expect(report.reason).toBe('The machine went down while the database was open.');
    expect(report.replayed).toBe(1);
    expect([await get('first'), await get('before the copy'), await get('after the copy')]).toEqual([1, 1, 2]);
    // What was there is set aside, not deleted.
    expect((await fs.readdir(dataDir)).some((name) => name.startsWith('pg-set-aside-'))).toBe(true);
  });

  it('did not happen where only the process was killed: its own files are used', async () => {
    const dataDir = await folder();
    const opened = await open(dataDir);
    await opened.maintain();
    await put('after the copy', 2);
    const running = await fs.readFile(path.join(dataDir, 'running.json'));
    await closeDatabase();
    await fs.writeFile(path.join(dataDir, 'running.json'), running);
    expect((await open(dataDir)).report).toEqual({ replayed: 0, restoredCopy: null, reason: null });
    expect(await get('after the copy')).toBe(2);
  });

  it('that tore the last line of the journal: the line was never acknowledged and is dropped', async () => {
    const dataDir = await folder();
    await open(dataDir);
    await put('second', 2);
    await closeDatabase();
    const file = (await journalFiles(dataDir)).at(-1) as string;
    const whole = await fs.readFile(file);
    const last = whole.subarray(whole.lastIndexOf(10, -2) + 1);
    await fs.appendFile(file, last.subarray(0, last.length / 2));
    expect((await open(dataDir)).report.replayed).toBe(0);
    await put('third', 3);
    await closeDatabase();
    await rollBack(dataDir);
    await open(dataDir);
    expect([await get('second'), await get('third')]).toEqual([2, 3]);
  });
});

describe('a journal', () => {
  it('with a damaged line in its middle is refused with a sentence, and nothing is changed', async () => {
    const dataDir = await folder();
    await open(dataDir);
    await put('second', 2);
    await put('third', 3);
    await closeDatabase();
    const file = (await journalFiles(dataDir)).at(-1) as string;
    const bytes = await fs.readFile(file);
    const middle = bytes.indexOf(10) + 60;
    bytes[middle] ^= 1;
    await fs.writeFile(file, bytes);
    for (let attempt = 0; attempt < 2; attempt += 1)
      await expect(open(dataDir)).rejects.toThrow(
        /The journal file .+ is damaged at byte \d+; nothing was replayed and nothing removed\./,
      );
    expect(await fs.readFile(file)).toEqual(bytes);
    // Mended, it opens: the refusals left nothing open that could have damaged the folder.
    bytes[middle] ^= 1;
    await fs.writeFile(file, bytes);
    await open(dataDir);
    expect(await get('third')).toBe(3);
  });

  it('keeps a record whose COMMIT failed as void, and does not replay it', async () => {
    const dataDir = await folder();
    const { db } = await open(dataDir);
    const pg = (db as unknown as { $client: JournaledPGlite }).$client;
    await pg.exec(
      'CREATE TABLE late_check (n int PRIMARY KEY, other int REFERENCES late_check (n) DEFERRABLE INITIALLY DEFERRED)',
    );
    const failing = pg.transaction(async (tx) => {
      await tx.query(`INSERT INTO setting (key, value) VALUES ('never committed', '1')`);
      await tx.query('INSERT INTO late_check VALUES (1, 7)');
    });
    await expect(failing).rejects.toThrow(/foreign key/);
    await put('committed', 1);
    expect(await get('never committed')).toBeUndefined();
    await closeDatabase();
    const lines = (await fs.readFile((await journalFiles(dataDir)).at(-1) as string, 'utf8')).trim().split('\n');
    expect(lines.filter((line) => line.includes('never committed'))).toHaveLength(1);
    expect(lines.filter((line) => line.includes('"void":true'))).toHaveLength(1);
    await rollBack(dataDir);
    expect((await open(dataDir)).report.replayed).toBe(1);
    expect([await get('never committed'), await get('committed')]).toEqual([undefined, 1]);
  });

  it('that is missing begins anew beside a database that was put there alone', async () => {
    const dataDir = await folder();
    await fs.rm(path.join(dataDir, 'journal'), { recursive: true });
    await open(dataDir);
    expect(await get('first')).toBe(1);
    await put('second', 2);
    await closeDatabase();
    await rollBack(dataDir);
    expect((await open(dataDir)).report.replayed).toBe(1);
    expect(await get('second')).toBe(2);
  });

  it('older than its database is refused with a sentence', async () => {
    const dataDir = await folder();
    await open(dataDir);
    for (let i = 0; i < 3; i += 1) await put(`later ${i}`, i);
    await closeDatabase();
    await fs.rm(path.join(dataDir, 'journal'), { recursive: true });
    await fs.cp(path.join(base, 'journal'), path.join(dataDir, 'journal'), { recursive: true });
    await expect(open(dataDir)).rejects.toThrow(/the journal folder is older than the database.*Nothing was changed/);
  });

  it('that does not reach back to its database is refused with a sentence', async () => {
    const dataDir = await folder();
    const opened = await open(dataDir);
    for (let i = 0; i < 3; i += 1) await put(`later ${i}`, i);
    // Two copies, so that the records before the older one are let go.
    await opened.maintain();
    await put('between', 1);
    await opened.maintain();
    await put('last', 1);
    await closeDatabase();
    await rollBack(dataDir);
    await expect(open(dataDir)).rejects.toThrow(/what lies between is missing, so nothing was replayed/);
  });
});

it('a second process opening the same embedded database is refused with a sentence', async () => {
  const dataDir = await folder();
  await open(dataDir);
  const child = start(await bundle('starting-program'), dataDir);
  const sentence = await child.line('refused');
  expect(sentence).toMatch(/^Another Kelvinleaf process has the data folder .+ open\. .+ Nothing was changed\./);
  expect((await child.ended).code).toBe(1);
  await put('still mine', true);
  expect(await get('still mine')).toBe(true);
});

describe('10 a crash in a migration', () => {
  const number = 999;
  /** The project's migrations and one more, of the given statements. */
  async function migrations(statements: string[]): Promise<string> {
    const target = path.join(root, `migrations-${(count += 1)}`);
    await fs.cp('drizzle', target, { recursive: true });
    const file = path.join(target, 'meta/_journal.json');
    const journal = JSON.parse(await fs.readFile(file, 'utf8')) as { entries: Record<string, unknown>[] };
    journal.entries.push({ ...journal.entries.at(-1), idx: number, when: 4102444800000, tag: `${number}_trial` });
    await fs.writeFile(file, JSON.stringify(journal));
    await fs.writeFile(path.join(target, `${number}_trial.sql`), statements.join('\n--> statement-breakpoint\n'));
    return target;
  }
  const openWith = (dataDir: string, migrationsFolder: string) =>
    openEmbedded(dataDir, (pg) => migrate(drizzle(pg), { migrationsFolder }));
  const good = ['CREATE TABLE made_half (n int)', "INSERT INTO setting (key, value) VALUES ('migrated', '1')"];

  it('10 leaves the database as it was, and the corrected migration goes through', async () => {
    const dataDir = await folder();
    const broken = await migrations(['CREATE TABLE made_half (n int)', 'SELECT 1 / 0']);
    await expect(openWith(dataDir, broken)).rejects.toThrow();
    const { pg } = await openWith(dataDir, await migrations(good));
    const { rows } = await pg.query('SELECT key FROM setting ORDER BY key');
    expect(rows).toEqual([{ key: 'first' }, { key: 'migrated' }]);
    await closeEmbedded(pg, dataDir);
  });

  it('10 killed in its middle is rolled back at the next start, and goes through then', async () => {
    const dataDir = await folder();
    const slow = await migrations([
      'CREATE TABLE made_half (n int)',
      'SELECT count(*) FROM generate_series(1, 400000000)',
    ]);
    const child = start(await bundle('migrating-program'), dataDir, [slow]);
    await child.line('migrating');
    await new Promise((resolve) => setTimeout(resolve, 700));
    child.process.kill('SIGKILL');
    await child.ended;
    expect(child.lines).not.toContain('opened now');
    const { pg } = await openWith(dataDir, await migrations(good));
    expect((await pg.query('SELECT count(*)::int AS n FROM made_half')).rows).toEqual([{ n: 0 }]);
    expect((await pg.query("SELECT value FROM setting WHERE key = 'first'")).rows).toEqual([{ value: 1 }]);
    await closeEmbedded(pg, dataDir);
  });
});
