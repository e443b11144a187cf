import fs from 'node:fs/promises';
import os from 'node:os';
import path from 'node:path';
import { PGlite } from '@electric-sql/pglite';
import { drizzle } from 'drizzle-orm/pglite';
import { migrate } from 'drizzle-orm/pglite/migrator';

/** Migrates one database through the real migrations and dumps it; every test file starts from a copy (0.4 s instead of 3). */
export default async function setup(): Promise<() => Promise<void>> {
  const folder = await fs.mkdtemp(path.join(os.tmpdir(), 'kelvinleaf-template-'));
  const pg = new PGlite();
  await migrate(drizzle(pg), { migrationsFolder: 'drizzle' });
  const file = path.join(folder, 'template.tar');
  await fs.writeFile(file, Buffer.from(await (await pg.dumpDataDir('none')).arrayBuffer()));
  await pg.close();
  process.env.DATABASE_TEMPLATE = file;
  return () => fs.rm(folder, { recursive: true, force: true });
}
