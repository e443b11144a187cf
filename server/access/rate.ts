import 'server-only';
import { createHash } from 'node:crypto';
import { eq, lt, sql } from 'drizzle-orm';
import { AppError } from '@/lib/errors/app-error';
import { getDb } from '@/server/db/client';
import { rateCount } from '@/server/db/schema/housekeeping';
import { env } from '@/server/env/env';

/**
 * Counts one turn under `key` and refuses above `limit` turns in `seconds`.
 * @throws AppError too_many with a sentence that says how long to wait.
 */
export async function takeTurn(key: string, limit: number, seconds: number): Promise<void> {
  const count = await countTurn(key, seconds);
  if (count > limit) {
    const minutes = Math.ceil(seconds / 60);
    throw new AppError(
      'too_many',
      `Too many tries. Wait ${minutes} minute${minutes === 1 ? '' : 's'}, then try again.`,
    );
  }
}

const hashKey = (key: string): string => createHash('sha256').update(key).digest('hex');

async function countTurn(key: string, seconds: number): Promise<number> {
  const db = await getDb();
  const oldest = new Date(Date.now() - seconds * 1000);
  const [row] = await db
    .insert(rateCount)
    .values({ key: hashKey(key), windowStart: new Date(), count: 1 })
    .onConflictDoUpdate({
      target: rateCount.key,
      set: {
        count: sql`CASE WHEN ${rateCount.windowStart} < ${oldest.toISOString()}::timestamptz THEN 1 ELSE ${rateCount.count} + 1 END`,
        windowStart: sql`CASE WHEN ${rateCount.windowStart} < ${oldest.toISOString()}::timestamptz THEN now() ELSE ${rateCount.windowStart} END`,
      },
    })
    .returning({ count: rateCount.count });
  return row.count;
}

/** After a success: the tries before it were a person's own slips, and the next ten are free again. */
export async function forgiveTurns(key: string): Promise<void> {
  await (await getDb()).delete(rateCount).where(eq(rateCount.key, hashKey(key)));
}

export async function forgetOldTurns(): Promise<void> {
  await (await getDb()).delete(rateCount).where(lt(rateCount.windowStart, new Date(Date.now() - 86_400_000)));
}

/**
 * The caller's address as far as it can be believed: with n trusted proxies, the n-th from the right of X-Forwarded-For;
 * without, the header is the caller's own word and everybody shares one address (limits per account still tell people apart).
 */
export function clientAddress(headers: Headers): string {
  const { trustedProxies } = env();
  if (trustedProxies === 0) return 'direct';
  const hops = (headers.get('x-forwarded-for') ?? '').split(',').map((hop) => hop.trim());
  return hops[hops.length - trustedProxies] || 'direct';
}
