import 'server-only';
import { randomBytes, randomUUID } from 'node:crypto';
import { and, asc, desc, eq, gt, isNull, ne } from 'drizzle-orm';
import { AppError } from '@/lib/errors/app-error';
import { initialsOf, type InstallationRole } from '@/lib/schemas/person';
import { hashToken, type Person } from '@/server/access/person';
import { forgiveTurns, takeTurn } from '@/server/access/rate';
import { checkPassword, hashPassword } from '@/server/auth/password';
import { getDb, type DbOrTx, type Tx } from '@/server/db/client';
import { account, invitation, session, token, user } from '@/server/db/schema/people';
import { securityEvent } from '@/server/db/schema/housekeeping';
import { env } from '@/server/env/env';
import { appendLog } from '@/server/log/service';
import { queueMail } from '@/server/mail/service';

const invitationDays = 7;

/**
 * Asks for the person's secret again before a binding step.
 * @throws AppError invalid on a wrong password; too_many above ten tries in ten minutes.
 */
export async function verifyOwnPassword(person: Person, password: string, purpose: string): Promise<void> {
  await takeTurn(`password:${person.id}`, 10, 600);
  const [row] = await (
    await getDb()
  )
    .select({ hash: account.password })
    .from(account)
    .where(and(eq(account.userId, person.id), eq(account.providerId, 'credential')));
  if (row?.hash && (await checkPassword({ hash: row.hash, password }))) {
    await forgiveTurns(`password:${person.id}`);
    return;
  }
  await noteSecurity('wrong password', `${purpose} by ${person.id}`, '');
  throw new AppError('invalid', 'The password is not right. Nothing was done; try again.', { field: 'password' });
}

export async function noteSecurity(kind: string, subject: string, address: string): Promise<void> {
  await (
    await getDb()
  )
    .insert(securityEvent)
    .values({ id: randomUUID(), kind, subject: subject.slice(0, 200), address: address.slice(0, 60) });
}

export type InvitationInput = { email: string; name: string; role: InstallationRole };

/** Invites by a mail whose link works once, for seven days. `link` is returned for the first start's printed line only. */
export async function invite(by: Person | null, input: InvitationInput): Promise<{ id: string; link: string }> {
  const secret = randomBytes(24).toString('base64url');
  const db = await getDb();
  const id = randomUUID();
  const link = `${env().baseUrl}/join?token=${secret}`;
  await db.transaction(async (tx) => {
    const [known] = await tx.select({ id: user.id }).from(user).where(eq(user.email, input.email));
    if (known) throw new AppError('conflict', 'Somebody with this address has an account already.', { field: 'email' });
    await tx
      .update(invitation)
      .set({ revokedAt: new Date() })
      .where(and(eq(invitation.email, input.email), isNull(invitation.usedAt), isNull(invitation.revokedAt)));
    await tx.insert(invitation).values({
      id,
      ...input,
      tokenHash: hashToken(secret),
      invitedBy: by?.id ?? null,
      expiresAt: new Date(Date.now() + invitationDays * 86_400_000),
    });
    if (by) {
      await queueMail(tx, {
        to: input.email,
        subject: 'Invitation to the laboratory’s notebook',
        lines: [
          `${by.name} invites you to Kelvinleaf, the notebook of the laboratory.`,
          `Choose a password here; the link works once, for ${invitationDays} days: ${link}`,
        ],
      });
    }
  });
  return { id, link };
}

/** @throws AppError gone with one sentence, whatever the reason, so that a guessed link learns nothing. */
export async function findInvitation(
  secret: string,
): Promise<{ id: string; email: string; name: string; role: InstallationRole }> {
  const [row] = await (
    await getDb()
  )
    .select()
    .from(invitation)
    .where(
      and(
        eq(invitation.tokenHash, hashToken(secret)),
        isNull(invitation.usedAt),
        isNull(invitation.revokedAt),
        gt(invitation.expiresAt, new Date()),
      ),
    );
  if (!row) throw new AppError('gone', 'This link has expired or was used already. Ask for a new invitation.');
  return { id: row.id, email: row.email, name: row.name, role: row.role as InstallationRole };
}

/** Makes the account that the invitation is for; name and password are the invited person's own choice. */
export async function acceptInvitation(
  secret: string,
  name: string,
  password: string,
  email?: string,
): Promise<{ email: string }> {
  const found = await findInvitation(secret);
  const address = found.email.endsWith('@first.invalid') ? email : found.email;
  if (!address) throw new AppError('invalid', 'Give your e-mail address.', { field: 'email' });
  const hash = await hashPassword(password);
  const db = await getDb();
  await db.transaction(async (tx) => {
    const used = await tx
      .update(invitation)
      .set({ usedAt: new Date() })
      .where(and(eq(invitation.id, found.id), isNull(invitation.usedAt)))
      .returning({ id: invitation.id });
    if (used.length === 0)
      throw new AppError('gone', 'This link has expired or was used already. Ask for a new invitation.');
    await createAccount(tx, { email: address, name, role: found.role, passwordHash: hash, actorId: null });
  });
  return { email: address };
}

export async function createAccount(
  tx: Tx,
  input: {
    id?: string;
    email: string;
    name: string;
    role: InstallationRole;
    passwordHash: string;
    actorId: string | null;
  },
): Promise<string> {
  const id = input.id ?? randomUUID();
  await tx.insert(user).values({ id, email: input.email, name: input.name, role: input.role, emailVerified: true });
  await tx
    .insert(account)
    .values({ id: randomUUID(), accountId: id, providerId: 'credential', userId: id, password: input.passwordHash });
  await appendLog(tx, {
    kind: 'account created',
    actorId: input.actorId ?? id,
    detail: { account: id, role: input.role },
  });
  return id;
}

export type AccountLine = {
  id: string;
  name: string;
  email: string;
  initials: string;
  role: InstallationRole;
  disabled: boolean;
  createdAt: string;
  twoFactor: boolean;
};

export async function listAccounts(db: DbOrTx): Promise<AccountLine[]> {
  const rows = await db.select().from(user).orderBy(asc(user.name));
  return rows.map((row) => ({
    id: row.id,
    name: row.name,
    email: row.email,
    initials: initialsOf(row.name),
    role: row.role === 'administrator' ? 'administrator' : 'member',
    disabled: row.disabledAt !== null,
    createdAt: row.createdAt.toISOString(),
    twoFactor: row.twoFactorEnabled === true,
  }));
}

/** Closes or opens an account, or changes its role; closing ends its sessions and tokens at once. */
export async function changeAccount(
  by: Person,
  id: string,
  change: { disabled?: boolean; role?: InstallationRole },
): Promise<void> {
  const db = await getDb();
  await db.transaction(async (tx) => {
    const [row] = await tx.select().from(user).where(eq(user.id, id)).for('update');
    if (!row) throw new AppError('not_found', 'There is no such account.');
    if (id === by.id)
      throw new AppError(
        'not_allowed',
        'Another administrator changes your own account, so that nobody locks the laboratory out.',
      );
    await tx
      .update(user)
      .set({
        ...(change.role ? { role: change.role } : {}),
        ...(change.disabled === undefined ? {} : { disabledAt: change.disabled ? new Date() : null }),
        updatedAt: new Date(),
      })
      .where(eq(user.id, id));
    if (change.disabled) {
      await tx.delete(session).where(eq(session.userId, id));
      await tx
        .update(token)
        .set({ revokedAt: new Date() })
        .where(and(eq(token.userId, id), isNull(token.revokedAt)));
    }
    await appendLog(tx, { kind: 'account changed', actorId: by.id, detail: { account: id, ...change } });
  });
}

export type InvitationLine = {
  id: string;
  email: string;
  name: string;
  role: string;
  createdAt: string;
  expiresAt: string;
  state: 'waiting' | 'used' | 'expired' | 'withdrawn';
};

export async function listInvitations(db: DbOrTx): Promise<InvitationLine[]> {
  const rows = await db.select().from(invitation).orderBy(desc(invitation.createdAt)).limit(200);
  return rows.map((row) => ({
    id: row.id,
    email: row.email,
    name: row.name,
    role: row.role,
    createdAt: row.createdAt.toISOString(),
    expiresAt: row.expiresAt.toISOString(),
    state: row.usedAt ? 'used' : row.revokedAt ? 'withdrawn' : row.expiresAt < new Date() ? 'expired' : 'waiting',
  }));
}

export async function withdrawInvitation(id: string): Promise<void> {
  await (
    await getDb()
  )
    .update(invitation)
    .set({ revokedAt: new Date() })
    .where(and(eq(invitation.id, id), isNull(invitation.usedAt)));
}

export type SessionLine = { id: string; startedAt: string; userAgent: string; current: boolean };

export async function listSessions(person: Person): Promise<SessionLine[]> {
  const rows = await (
    await getDb()
  )
    .select()
    .from(session)
    .where(and(eq(session.userId, person.id), gt(session.expiresAt, new Date())))
    .orderBy(desc(session.createdAt));
  return rows.map((row) => ({
    id: row.id,
    startedAt: row.createdAt.toISOString(),
    userAgent: row.userAgent ?? '',
    current: row.id === person.sessionId,
  }));
}

export async function endSession(person: Person, id: string): Promise<void> {
  await (await getDb()).delete(session).where(and(eq(session.id, id), eq(session.userId, person.id)));
}

export async function changePassword(person: Person, current: string, next: string): Promise<void> {
  await verifyOwnPassword(person, current, 'change of password');
  const hash = await hashPassword(next);
  const db = await getDb();
  await db.transaction(async (tx) => {
    await tx
      .update(account)
      .set({ password: hash, updatedAt: new Date() })
      .where(and(eq(account.userId, person.id), eq(account.providerId, 'credential')));
    // Every other sign-in ends: whoever knew the old password is out.
    await tx.delete(session).where(and(eq(session.userId, person.id), ne(session.id, person.sessionId ?? '')));
  });
}

export async function makeToken(userId: string, label: string): Promise<{ id: string; secret: string }> {
  const secret = `kl_${randomBytes(24).toString('base64url')}`;
  const id = randomUUID();
  await (await getDb()).insert(token).values({ id, userId, label, tokenHash: hashToken(secret) });
  return { id, secret };
}

export type TokenLine = { id: string; label: string; createdAt: string; lastUsedAt: string | null };

export async function listTokens(person: Person): Promise<TokenLine[]> {
  const rows = await (
    await getDb()
  )
    .select()
    .from(token)
    .where(and(eq(token.userId, person.id), isNull(token.revokedAt)))
    .orderBy(desc(token.createdAt));
  return rows.map((row) => ({
    id: row.id,
    label: row.label,
    createdAt: row.createdAt.toISOString(),
    lastUsedAt: row.lastUsedAt?.toISOString() ?? null,
  }));
}

export async function revokeToken(person: Person, id: string): Promise<void> {
  await (
    await getDb()
  )
    .update(token)
    .set({ revokedAt: new Date() })
    .where(and(eq(token.id, id), eq(token.userId, person.id)));
}
