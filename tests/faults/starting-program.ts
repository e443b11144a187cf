import { eq } from 'drizzle-orm';
import { openDatabase } from '@/server/db/client';
import { setting } from '@/server/db/schema/housekeeping';
import { startServer } from '@/server/start/service';

/** Starts as the server does and says what it noted about recovery; ends with SIGTERM, or with the sentence of a refusal. */

try {
  await startServer();
  const { db } = await openDatabase();
  const [noted] = await db.select().from(setting).where(eq(setting.key, 'last-recovery'));
  process.stdout.write(`recovery ${JSON.stringify(noted?.value ?? null)}\n`);
  // The server's timers do not hold the process; a listening port would.
  setInterval(() => undefined, 1000);
} catch (error) {
  process.stdout.write(`refused ${error instanceof Error ? error.message : String(error)}\n`);
  process.exit(1);
}
