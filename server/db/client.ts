import 'server-only';
import fs from 'node:fs/promises';
import path from 'node:path';
import { drizzle as drizzlePg } from 'drizzle-orm/node-postgres';
import { migrate as migratePg } from 'drizzle-orm/node-postgres/migrator';
import { drizzle as drizzlePglite, type PgliteDatabase } from 'drizzle-orm/pglite';
import { migrate as migratePglite } from 'drizzle-orm/pglite/migrator';
import { Pool } from 'pg';
import { env } from '@/server/env/env';
import { closeEmbedded, keepCopy, openEmbedded, type JournaledPGlite, type StartReport } from './embedded';
import { lockFolder } from './lock';
import { schema } from './schema/all';

export type Db = PgliteDatabase<typeof schema>;
export type Tx = Parameters<Parameters<Db['transaction']>[0]>[0];
/** What a query takes: the database, or the transaction it is part of. */
export type DbOrTx = Db | Tx;

export type OpenDatabase = {
  db: Db;
  report: StartReport;
  /** Flush, and keep a copy the journal can go on from; nothing to do on a PostgreSQL server. */
  maintain: () => Promise<void>;
  /** Bytes of journal since the last copy. */
  journalBytes: () => number;
  vacuum: () => Promise<void>;
  close: () => Promise<void>;
};

const migrationsFolder = path.join(/* turbopackIgnore: true */ process.cwd(), 'drizzle');
const holder = globalThis as typeof globalThis & { kelvinleafDatabase?: Promise<OpenDatabase> };

/** The installation's database, opened at first use; one per process. */
export function openDatabase(): Promise<OpenDatabase> {
  // A failed opening is forgotten, so that the next request tries again (the server may have come back).
  holder.kelvinleafDatabase ??= open().catch((error) => {
    holder.kelvinleafDatabase = undefined;
    throw error;
  });
  return holder.kelvinleafDatabase;
}

export async function getDb(): Promise<Db> {
  return (await openDatabase()).db;
}

export async function closeDatabase(): Promise<void> {
  const opened = holder.kelvinleafDatabase;
  holder.kelvinleafDatabase = undefined;
  if (opened) await (await opened).close();
}

async function open(): Promise<OpenDatabase> {
  const { databaseUrl, dataDir } = env();
  return databaseUrl ? openServer(databaseUrl) : openLocal(dataDir);
}

async function openServer(url: string): Promise<OpenDatabase> {
  const pool = new Pool({ connectionString: url, max: 10 });
  const db = drizzlePg(pool, { schema });
  // One process migrates at a time, whoever starts first.
  const guard = await pool.connect();
  try {
    await guard.query('SELECT pg_advisory_lock(7301)');
    await migratePg(db, { migrationsFolder });
  } finally {
    await guard.query('SELECT pg_advisory_unlock(7301)');
    guard.release();
  }
  return {
    // Both drivers share Drizzle's PostgreSQL dialect; only the result type of raw execute() differs, and its rows do not.
    db: db as unknown as Db,
    report: { replayed: 0, restoredCopy: null, reason: null },
    maintain: async () => {},
    journalBytes: () => 0,
    vacuum: async () => {},
    close: () => pool.end(),
  };
}

async function openLocal(dataDir: string): Promise<OpenDatabase> {
  const release = await lockFolder(dataDir);
  try {
    const template = env().databaseTemplate;
    const { pg, report } = await openEmbedded(
      dataDir,
      (opened) => migratePglite(drizzlePglite(opened, { schema }), { migrationsFolder }),
      template ? { loadDataDir: new Blob([await fs.readFile(template)]) } : {},
    );
    return localDatabase(pg, dataDir, report, release);
  } catch (error) {
    release();
    throw error;
  }
}

function localDatabase(pg: JournaledPGlite, dataDir: string, report: StartReport, release: () => void): OpenDatabase {
  return {
    db: drizzlePglite(pg, { schema }),
    report,
    maintain: async () => {
      await keepCopy(pg, dataDir);
    },
    journalBytes: () => pg.journal?.bytes ?? 0,
    vacuum: async () => {
      await pg.exec('VACUUM ANALYZE');
    },
    close: async () => {
      await closeEmbedded(pg, dataDir);
      release();
    },
  };
}
