import 'server-only';
import fs from 'node:fs/promises';
import { readFileSync } from 'node:fs';
import path from 'node:path';
import { PGlite, type PGliteOptions, type QueryOptions, type Results, type Transaction } from '@electric-sql/pglite';
import { syncFolder, syncTree } from './files';
import { Journal, type RowChange } from './journal';

/**
 * PGlite with a fsynced journal beside it.
 *
 * Guarantee: once a statement or transaction that changed rows has resolved, its row changes are in the journal on disk,
 * so they survive a power cut even where the database's own files do not; exception: rows of `job` and `rate_count`.
 * The changes are appended before COMMIT; where COMMIT then fails, the record is marked void.
 */
export class JournaledPGlite extends PGlite {
  journal: Journal | null = null;

  override async query<T>(query: string, params?: unknown[], options?: QueryOptions): Promise<Results<T>> {
    if (!this.journal || !/^\s*(insert|update|delete|with)\b/i.test(query))
      return super.query<T>(query, params, options);
    return this.transaction((tx) => tx.query<T>(query, params, options));
  }

  override async transaction<T>(work: (tx: Transaction) => Promise<T>): Promise<T> {
    const journal = this.journal;
    if (!journal) return super.transaction(work);
    let sealed: number | null = null;
    try {
      return await super.transaction(async (tx) => {
        const result = await work(tx);
        sealed = await seal(tx, journal);
        return result;
      });
    } catch (error) {
      if (sealed !== null) await journal.markVoid(sealed);
      throw error;
    }
  }
}

async function seal(tx: Transaction, journal: Journal): Promise<number | null> {
  const { rows } = await tx.query<{ tbl: string; op: RowChange['op']; row_json: Record<string, unknown> }>(
    'SELECT tbl, op, row_json FROM pg_temp.journal_capture ORDER BY n',
  );
  if (rows.length === 0) return null;
  const seq = await journal.append(rows.map((row) => ({ table: row.tbl, op: row.op, row: row.row_json })));
  await tx.query('UPDATE journal_position SET seq = $1 WHERE id = 1', [seq]);
  return seq;
}

export type StartReport = {
  /** Journal records applied because the database did not hold them. */
  replayed: number;
  /** Name of the copy that was put in place of the database, or null. */
  restoredCopy: string | null;
  reason: string | null;
};

export type EmbeddedDatabase = { pg: JournaledPGlite; report: StartReport };

const paths = (dataDir: string) => ({
  pg: path.join(dataDir, 'pg'),
  journal: path.join(dataDir, 'journal'),
  copies: path.join(dataDir, 'copies'),
  running: path.join(dataDir, 'running.json'),
});

/**
 * Opens `dataDir/pg`, lets `migrate` bring the schema up to date, and replays what the journal holds beyond it.
 * After a machine that went down with the database open, and where the database does not open, the newest copy that opens
 * takes its place first: PGlite never fsyncs, so files written just before a power cut are not to be trusted.
 */
export async function openEmbedded(
  dataDir: string,
  migrate: (pg: JournaledPGlite) => Promise<void>,
  options: Pick<PGliteOptions, 'loadDataDir'> = {},
): Promise<EmbeddedDatabase> {
  const at = paths(dataDir);
  await fs.mkdir(dataDir, { recursive: true, mode: 0o700 });
  const report: StartReport = { replayed: 0, restoredCopy: null, reason: null };
  const powerLost = await machineWentDown(at.running);
  const copies = await listCopies(at.copies);
  if (powerLost && copies.length > 0) {
    report.reason = 'The machine went down while the database was open.';
    report.restoredCopy = await putCopyInPlace(at.pg, at.copies, copies);
  }
  let pg: JournaledPGlite;
  try {
    pg = await open(at.pg, options);
  } catch (error) {
    if (copies.length === 0) throw error;
    report.reason = `The database did not open (${error instanceof Error ? error.message : String(error)}).`;
    report.restoredCopy = await putCopyInPlace(at.pg, at.copies, copies);
    pg = await open(at.pg, {});
  }
  try {
    await bringUpToDate(pg, at.journal, migrate, report);
  } catch (error) {
    // A refused database must not stay open: the next try would put a second one on the same files.
    await pg.close();
    throw error;
  }
  await fs.writeFile(at.running, JSON.stringify({ boot: bootId(), pid: process.pid }));
  if (powerLost || report.restoredCopy) report.reason ??= 'The machine went down while the database was open.';
  return { pg, report };
}

async function bringUpToDate(
  pg: JournaledPGlite,
  journalFolder: string,
  migrate: (pg: JournaledPGlite) => Promise<void>,
  report: StartReport,
): Promise<void> {
  await migrate(pg);
  const journal = await Journal.open(journalFolder);
  try {
    report.replayed = await replay(pg, journal);
    await pg.exec(
      'CREATE TEMP TABLE journal_capture (n bigserial, tbl text, op text, row_json jsonb) ON COMMIT DELETE ROWS;' +
        " SET kelvinleaf.journal = 'on';",
    );
  } catch (error) {
    await journal.close();
    throw error;
  }
  pg.journal = journal;
}

async function open(folder: string, options: Pick<PGliteOptions, 'loadDataDir'>): Promise<JournaledPGlite> {
  const fresh = !(await exists(path.join(folder, 'PG_VERSION')));
  const pg = new JournaledPGlite({
    dataDir: folder,
    startParams: [...PGlite.defaultStartParams, '-c', 'max_wal_size=64MB'],
    ...(fresh ? options : {}),
  });
  await pg.waitReady;
  return pg;
}

/** Applies what the journal holds beyond the database. Constraints and triggers rest meanwhile: the rows once passed them. */
async function replay(pg: JournaledPGlite, journal: Journal): Promise<number> {
  const { rows } = await pg.query<{ seq: number }>('SELECT seq FROM journal_position WHERE id = 1');
  const held = Number(rows[0].seq);
  if (journal.last === 0 && held > 0) await journal.startAfter(held);
  if (journal.last < held) {
    throw new Error(
      `The database holds changes up to ${held}, the journal only up to ${journal.last}: the journal folder is older than ` +
        'the database. Nothing was changed. Put the newer journal folder back beside it.',
    );
  }
  const records = await journal.readAfter(held);
  if (records.length === 0) return 0;
  const keys = await primaryKeys(pg);
  await pg.transaction(async (tx) => {
    await tx.exec('SET LOCAL session_replication_role = replica');
    for (const record of records) {
      for (const change of record.changes) await apply(tx, change, keys);
    }
    await tx.query('UPDATE journal_position SET seq = $1 WHERE id = 1', [records[records.length - 1].seq]);
  });
  return records.length;
}

async function apply(tx: Transaction, change: RowChange, keys: Map<string, string[]>): Promise<void> {
  const key = keys.get(change.table);
  if (!key) return; // A table that a later migration removed.
  const quoted = `"${change.table}"`;
  const match = key.map((column) => `t."${column}" = r."${column}"`).join(' AND ');
  await tx.query(`DELETE FROM ${quoted} t USING jsonb_populate_record(NULL::${quoted}, $1::jsonb) r WHERE ${match}`, [
    JSON.stringify(change.row),
  ]);
  if (change.op === 'put') {
    await tx.query(`INSERT INTO ${quoted} SELECT * FROM jsonb_populate_record(NULL::${quoted}, $1::jsonb)`, [
      JSON.stringify(change.row),
    ]);
  }
}

async function primaryKeys(pg: PGlite): Promise<Map<string, string[]>> {
  const { rows } = await pg.query<{ table_name: string; columns: string[] }>(
    `SELECT c.relname AS table_name, array_agg(a.attname::text) AS columns
       FROM pg_index i JOIN pg_class c ON c.oid = i.indrelid JOIN pg_namespace n ON n.oid = c.relnamespace
       JOIN pg_attribute a ON a.attrelid = c.oid AND a.attnum = ANY (i.indkey)
      WHERE i.indisprimary AND n.nspname = 'public' GROUP BY c.relname`,
  );
  return new Map(rows.map((row) => [row.table_name, row.columns]));
}

/**
 * Flushes everything, keeps a copy of the database folder from which the journal can go on, and lets go of journal that
 * no kept copy needs. Requests wait meanwhile (some 0.2 s for an ordinary notebook).
 */
export async function keepCopy(pg: JournaledPGlite, dataDir: string): Promise<string> {
  const at = paths(dataDir);
  const journal = pg.journal;
  if (!journal) throw new Error('A copy is kept only of the embedded database with its journal.');
  await fs.mkdir(at.copies, { recursive: true, mode: 0o700 });
  await pg.exec('CHECKPOINT');
  const name = await pg.runExclusive(async () => {
    const copy = String(journal.last).padStart(12, '0');
    const part = path.join(at.copies, `${copy}.part`);
    await fs.rm(part, { recursive: true, force: true });
    await fs.cp(at.pg, part, { recursive: true });
    await journal.rotate();
    return copy;
  });
  const part = path.join(at.copies, `${name}.part`);
  await syncTree(at.pg);
  await syncTree(part);
  await fs.rm(path.join(at.copies, name), { recursive: true, force: true });
  await fs.rename(part, path.join(at.copies, name));
  await syncFolder(at.copies);
  const kept = await listCopies(at.copies);
  for (const old of kept.slice(2)) await fs.rm(path.join(at.copies, old), { recursive: true, force: true });
  const oldest = kept.slice(0, 2).at(-1);
  if (oldest) await journal.dropThrough(Number.parseInt(oldest, 10));
  return name;
}

/** Closes so that the next start finds a flushed database and no trace of a crash. */
export async function closeEmbedded(pg: JournaledPGlite, dataDir: string): Promise<void> {
  const at = paths(dataDir);
  await pg.exec('CHECKPOINT');
  await pg.close();
  await pg.journal?.close();
  await syncTree(at.pg);
  await fs.rm(at.running, { force: true });
}

/** Newest first. */
async function listCopies(folder: string): Promise<string[]> {
  if (!(await exists(folder))) return [];
  return (await fs.readdir(folder))
    .filter((name) => /^\d{12}$/.test(name))
    .sort()
    .reverse();
}

async function putCopyInPlace(pgFolder: string, copiesFolder: string, copies: string[]): Promise<string> {
  // What was there is set aside, never deleted: someone may want to look at it.
  if (await exists(pgFolder)) await fs.rename(pgFolder, `${pgFolder}-set-aside-${Date.now()}`);
  for (const copy of copies) {
    await fs.cp(path.join(copiesFolder, copy), pgFolder, { recursive: true });
    try {
      const trial = await open(pgFolder, {});
      await trial.close();
      return copy;
    } catch {
      await fs.rm(pgFolder, { recursive: true, force: true });
    }
  }
  throw new Error(
    `The database does not open, and neither does any copy in ${copiesFolder}. Nothing was deleted. Restore a backup.`,
  );
}

function bootId(): string | null {
  try {
    return readFileSync('/proc/sys/kernel/random/boot_id', 'utf8').trim();
  } catch {
    return null; // Not Linux: there PostgreSQL's own recovery decides.
  }
}

async function machineWentDown(runningFile: string): Promise<boolean> {
  if (!(await exists(runningFile))) return false;
  const { boot } = JSON.parse(await fs.readFile(runningFile, 'utf8')) as { boot: string | null };
  return boot !== null && boot !== bootId();
}

async function exists(file: string): Promise<boolean> {
  return fs.access(file).then(
    () => true,
    () => false,
  );
}
