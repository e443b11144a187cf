import 'server-only';
import { eq } from 'drizzle-orm';
import { invite } from '@/server/accounts/service';
import { drained } from '@/server/access/in-flight';
import { forgetOldTurns } from '@/server/access/rate';
import { closeDatabase, getDb, openDatabase } from '@/server/db/client';
import { setting } from '@/server/db/schema/housekeeping';
import { user } from '@/server/db/schema/people';
import { report } from '@/server/diagnostics/report';
import { env } from '@/server/env/env';
import { forgetDoneJobs, releaseLeases, startWorker } from '@/server/jobs/service';
import { sendDueMail } from '@/server/mail/service';
import { serveCommands } from '@/server/commands/socket';
import { settleTraces } from '@/server/traces/service';
import { jobHandlers } from './handlers';

const copyEveryMs = 6 * 3600_000;
const tidyEveryMs = 3600_000;
/** Bytes of journal after which a copy of the database is kept early, so that a replay stays short. */
const longestJournal = 64e6;

const holder = globalThis as typeof globalThis & { kelvinleafStarted?: boolean };

/** Once per process. Throws a sentence where the data folder is in use by another one. */
export async function startServer(): Promise<void> {
  if (holder.kelvinleafStarted) return;
  holder.kelvinleafStarted = true;
  const opened = await openDatabase();
  const { report: start } = opened;
  if (start.restoredCopy || start.replayed > 0) {
    const sentence = startSentence(start);
    say(sentence);
    report('journal replayed', { sentence });
    await noteStart(sentence);
  }
  await releaseLeases();
  await firstContent();
  // Files received before a crash are read now, beside the first requests.
  settleTraces().catch((error) => report('settling traces', {}, error));
  const stopCommands = await serveCommands();
  const lastRun = { mail: 0, copy: Date.now() - copyEveryMs + 60_000, tidy: Date.now() };
  const worker = startWorker(jobHandlers, async () => {
    const now = Date.now();
    if (now - lastRun.mail >= 1000) {
      lastRun.mail = now;
      await sendDueMail(await getDb());
    }
    if (now - lastRun.tidy >= tidyEveryMs) {
      lastRun.tidy = now;
      await forgetOldTurns();
      await forgetDoneJobs();
      await settleTraces();
      await opened.vacuum();
    }
    if (now - lastRun.copy >= copyEveryMs || opened.journalBytes() > longestJournal) {
      lastRun.copy = now;
      await opened.maintain();
    }
  });
  // The supervisor sets NEXT_MANUAL_SIG_HANDLE: Next leaves the signals to us, since the database must outlive the requests.
  const stop = async () => {
    stopCommands();
    await drained();
    await worker.stop();
    await closeDatabase();
    process.exit(0);
  };
  for (const signal of ['SIGTERM', 'SIGINT'] as const) {
    process.once(signal, () => {
      stop().catch((error) => {
        report('stopping', {}, error);
        process.exit(1);
      });
    });
  }
}

function startSentence(start: { replayed: number; restoredCopy: string | null; reason: string | null }): string {
  const copy = start.restoredCopy
    ? `${start.reason ?? ''} The last good copy of the database was put in its place. `
    : '';
  const replay =
    start.replayed > 0
      ? `${start.replayed} changes that the database did not hold were taken from the journal. Nothing that was acknowledged is missing.`
      : 'The journal held nothing beyond it.';
  return `${copy}${replay}`;
}

/** Shown on the administration page. */
async function noteStart(sentence: string): Promise<void> {
  const db = await getDb();
  const value = { at: new Date().toISOString(), sentence };
  await db
    .insert(setting)
    .values({ key: 'last-recovery', value })
    .onConflictDoUpdate({ target: setting.key, set: { value } });
}

const say = (line: string) => process.stdout.write(`${line}\n`);

/** An empty installation gets the demo notebook, or with DEMO=off a link for its first administrator. */
async function firstContent(): Promise<void> {
  const db = await getDb();
  const [somebody] = await db.select({ id: user.id }).from(user).limit(1);
  if (somebody) return;
  if (env().demo) {
    const { loadDemo } = await import('@/server/demo/service');
    await loadDemo();
    return;
  }
  const [known] = await db.select().from(setting).where(eq(setting.key, 'first-link'));
  if (known) say('The link for the first administrator was printed at an earlier start; here is a new one.');
  const { link } = await invite(null, {
    email: 'administrator@first.invalid',
    name: 'First administrator',
    role: 'administrator',
  });
  await db.insert(setting).values({ key: 'first-link', value: true }).onConflictDoNothing();
  say(`First administrator: open ${link}`);
}
