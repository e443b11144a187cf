import 'server-only';
import { createHash } from 'node:crypto';
import { and, eq, isNull } from 'drizzle-orm';
import { initialsOf, type InstallationRole } from '@/lib/schemas/person';
import { getAuth } from '@/server/auth/auth';
import { getDb } from '@/server/db/client';
import { token, user } from '@/server/db/schema/people';

export type Person = {
  id: string;
  name: string;
  email: string;
  initials: string;
  role: InstallationRole;
  twoFactor: boolean;
  /** How this call was authenticated; a token never signs. */
  by: 'session' | 'token';
  sessionId: string | null;
  sessionStartedAt: Date | null;
};

export const hashToken = (secret: string): string => createHash('sha256').update(secret).digest('hex');

/** Who makes this call: by bearer token, else by session cookie. Closed accounts are nobody. */
export async function findPerson(headers: Headers): Promise<Person | null> {
  const bearer = /^Bearer (\S+)$/.exec(headers.get('authorization') ?? '');
  if (bearer) return findByToken(bearer[1]);
  // Without a cookie there is no session; spares the look-up on public pages.
  if (!headers.get('cookie')) return null;
  const auth = await getAuth();
  const found = await auth.api.getSession({ headers });
  if (!found || found.user.disabledAt) return null;
  return {
    id: found.user.id,
    name: found.user.name,
    email: found.user.email,
    initials: initialsOf(found.user.name),
    role: found.user.role === 'administrator' ? 'administrator' : 'member',
    twoFactor: found.user.twoFactorEnabled === true,
    by: 'session',
    sessionId: found.session.id,
    sessionStartedAt: found.session.createdAt,
  };
}

async function findByToken(secret: string): Promise<Person | null> {
  const db = await getDb();
  const [row] = await db
    .select({ user, tokenId: token.id })
    .from(token)
    .innerJoin(user, eq(user.id, token.userId))
    .where(and(eq(token.tokenHash, hashToken(secret)), isNull(token.revokedAt), isNull(user.disabledAt)));
  if (!row) return null;
  await db.update(token).set({ lastUsedAt: new Date() }).where(eq(token.id, row.tokenId));
  return {
    id: row.user.id,
    name: row.user.name,
    email: row.user.email,
    initials: initialsOf(row.user.name),
    role: 'member',
    twoFactor: false,
    by: 'token',
    sessionId: null,
    sessionStartedAt: null,
  };
}
