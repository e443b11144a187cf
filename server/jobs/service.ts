import 'server-only';
import { randomUUID } from 'node:crypto';
import { and, asc, eq, lt, lte, or, sql } from 'drizzle-orm';
import { getDb, type DbOrTx } from '@/server/db/client';
import { job } from '@/server/db/schema/housekeeping';
import { report } from '@/server/diagnostics/report';

/** Kinds of work and what does it; a handler may run twice for one job and must then do no harm. */
export type JobHandlers = Record<string, (payload: Record<string, unknown>) => Promise<void>>;

const leaseMs = 10 * 60_000;
const mostAttempts = 5;

/** Queues work, in the transaction that makes it necessary. An equal `key` that has not finished well is not queued twice. */
export async function enqueueJob(
  db: DbOrTx,
  kind: string,
  key: string,
  payload: Record<string, unknown>,
): Promise<void> {
  await db
    .insert(job)
    .values({ id: randomUUID(), kind, key, payload })
    .onConflictDoUpdate({
      target: job.key,
      set: { state: 'waiting', attempts: 0, runAfter: new Date(), problem: null, payload },
      setWhere: or(eq(job.state, 'done'), eq(job.state, 'failed')),
    });
  wake();
}

const holder = globalThis as typeof globalThis & { kelvinleafWake?: () => void };
const wake = () => holder.kelvinleafWake?.();

/** Takes one job that waits, or whose worker was killed, and does it. False when there was none. */
export async function runOneJob(handlers: JobHandlers): Promise<boolean> {
  const db = await getDb();
  const taken = await db.transaction(async (tx) => {
    const now = new Date();
    const [row] = await tx
      .select()
      .from(job)
      .where(
        or(
          and(eq(job.state, 'waiting'), lte(job.runAfter, now)),
          and(eq(job.state, 'running'), lt(job.leaseUntil, now)),
        ),
      )
      .orderBy(asc(job.runAfter))
      .limit(1)
      .for('update', { skipLocked: true });
    if (!row) return null;
    await tx
      .update(job)
      .set({ state: 'running', attempts: row.attempts + 1, leaseUntil: new Date(now.getTime() + leaseMs) })
      .where(eq(job.id, row.id));
    return { ...row, attempts: row.attempts + 1 };
  });
  if (!taken) return false;
  try {
    const handler = handlers[taken.kind];
    if (!handler) throw new Error(`Nothing does jobs of the kind ${taken.kind}.`);
    await handler(taken.payload);
    await db.update(job).set({ state: 'done', leaseUntil: null, problem: null }).where(eq(job.id, taken.id));
  } catch (error) {
    report('job failed', { job: taken.id, kind: taken.kind, attempt: taken.attempts }, error);
    const problem = error instanceof Error ? error.message.slice(0, 500) : String(error);
    const again = taken.attempts < mostAttempts;
    await db
      .update(job)
      .set({
        state: again ? 'waiting' : 'failed',
        leaseUntil: null,
        problem,
        runAfter: new Date(Date.now() + 5000 * 2 ** taken.attempts),
      })
      .where(eq(job.id, taken.id));
  }
  return true;
}

/** Jobs that a killed process of this machine left running: with one process per embedded database they can start again at once. */
export async function releaseLeases(): Promise<void> {
  await (await getDb()).update(job).set({ state: 'waiting', leaseUntil: null }).where(eq(job.state, 'running'));
}

export async function forgetDoneJobs(): Promise<void> {
  await (await getDb()).delete(job).where(and(eq(job.state, 'done'), lt(job.runAfter, sql`now() - interval '7 days'`)));
}

/** Runs jobs and `everySecond` until stopped; `stop` waits for the work in hand. */
export function startWorker(handlers: JobHandlers, everySecond: () => Promise<void>): { stop: () => Promise<void> } {
  let stopping = false;
  let wakeUp: (() => void) | null = null;
  holder.kelvinleafWake = () => wakeUp?.();
  const loop = async () => {
    while (!stopping) {
      try {
        await everySecond();
        while (!stopping && (await runOneJob(handlers))) {
          // One after another: the machine is also serving people.
        }
      } catch (error) {
        report('worker loop', {}, error);
      }
      if (stopping) break;
      await new Promise<void>((resolve) => {
        wakeUp = resolve;
        setTimeout(resolve, 1000).unref();
      });
      wakeUp = null;
    }
  };
  const running = loop();
  return {
    stop: async () => {
      stopping = true;
      wakeUp?.();
      await running;
    },
  };
}
