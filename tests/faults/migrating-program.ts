import { drizzle } from 'drizzle-orm/pglite';
import { migrate } from 'drizzle-orm/pglite/migrator';
import { openEmbedded } from '@/server/db/embedded';

/** Opens the folder with the migrations of another folder. */

await openEmbedded(process.env.DATA_DIR ?? '', async (pg) => {
  process.stdout.write('migrating now\n');
  await migrate(drizzle(pg), { migrationsFolder: process.argv[2] });
});
process.stdout.write('opened now\n');
