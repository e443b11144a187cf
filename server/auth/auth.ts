import 'server-only';
import { betterAuth } from 'better-auth';
import { APIError } from 'better-auth/api';
import { drizzleAdapter } from 'better-auth/adapters/drizzle';
import { twoFactor } from 'better-auth/plugins';
import { eq } from 'drizzle-orm';
import { getDb, type Db } from '@/server/db/client';
import { schema } from '@/server/db/schema/all';
import { env, secrets } from '@/server/env/env';
import { report } from '@/server/diagnostics/report';
import { queueMail } from '@/server/mail/service';
import { checkPassword, hashPassword } from './password';

/** Life of a session without use, and of a password-reset link, in seconds. */
const sessionSeconds = 12 * 3600;
const resetSeconds = 3600;

export const sessionCookie = () => (env().baseUrl.startsWith('https:') ? '__Host-kelvinleaf' : 'kelvinleaf');

function build(db: Db) {
  const secure = env().baseUrl.startsWith('https:');
  return betterAuth({
    appName: 'Kelvinleaf',
    baseURL: env().baseUrl,
    secret: secrets().session,
    database: drizzleAdapter(db, { provider: 'pg', schema }),
    telemetry: { enabled: false },
    // Failed sign-ins are in the security log; the rest goes where our own lines go, without colours.
    logger: { level: 'error', log: (level, message) => report('sign-in library', { level, message }) },
    // Our own limits count per account and per address, in the database.
    rateLimit: { enabled: false },
    emailAndPassword: {
      enabled: true,
      disableSignUp: true,
      minPasswordLength: 8,
      maxPasswordLength: 128,
      password: { hash: hashPassword, verify: checkPassword },
      resetPasswordTokenExpiresIn: resetSeconds,
      revokeSessionsOnPasswordReset: true,
      sendResetPassword: async ({ user, token }) => {
        const db = await getDb();
        await queueMail(db, {
          to: user.email,
          subject: 'Set a new password',
          lines: [
            `Somebody, probably you, asked to set a new password for ${user.email}.`,
            `This link works once, for an hour: ${env().baseUrl}/reset?token=${encodeURIComponent(token)}`,
            'If it was not you, do nothing: the old password stays.',
          ],
        });
      },
    },
    user: {
      additionalFields: {
        role: { type: 'string', input: false, defaultValue: 'member' },
        disabledAt: { type: 'date', input: false, required: false },
      },
    },
    session: { expiresIn: sessionSeconds, updateAge: 600, cookieCache: { enabled: false } },
    databaseHooks: {
      session: {
        create: {
          before: async (session) => {
            const [person] = await (
              await getDb()
            )
              .select({ disabledAt: schema.user.disabledAt })
              .from(schema.user)
              .where(eq(schema.user.id, session.userId));
            // The same words as for a wrong password: whether an account is closed is nobody's business.
            if (!person || person.disabledAt)
              throw new APIError('UNAUTHORIZED', { message: 'Invalid email or password' });
          },
        },
      },
    },
    plugins: [twoFactor({ issuer: 'Kelvinleaf' })],
    advanced: {
      useSecureCookies: false,
      cookiePrefix: secure ? '__Host-kelvinleaf' : 'kelvinleaf',
      cookies: { session_token: { name: sessionCookie() } },
      defaultCookieAttributes: { httpOnly: true, sameSite: 'lax', path: '/', secure },
    },
  });
}

export type Auth = ReturnType<typeof build>;

const holder = globalThis as typeof globalThis & { kelvinleafAuth?: { db: Db; auth: Auth } };

export async function getAuth(): Promise<Auth> {
  const db = await getDb();
  if (holder.kelvinleafAuth?.db !== db) holder.kelvinleafAuth = { db, auth: build(db) };
  return holder.kelvinleafAuth.auth;
}
