import 'server-only';
import { randomUUID } from 'node:crypto';
import { APIError } from 'better-auth/api';
import { eq } from 'drizzle-orm';
import { AppError } from '@/lib/errors/app-error';
import type { Person } from '@/server/access/person';
import { clientAddress, takeTurn } from '@/server/access/rate';
import { getDb } from '@/server/db/client';
import { securityEvent } from '@/server/db/schema/housekeeping';
import { session, user } from '@/server/db/schema/people';
import { getAuth } from './auth';

/** better-auth's answer with its cookies; its body is replaced by ours. */
function withCookies(answer: Response, body: object): Response {
  const response = Response.json(body, { headers: { 'cache-control': 'no-store' } });
  for (const cookie of answer.headers.getSetCookie()) response.headers.append('set-cookie', cookie);
  return response;
}

const wrongPassword = () =>
  new AppError('invalid', 'E-mail address or password is not right. Nothing is lost; try again.', {
    field: 'password',
  });

/**
 * Signs in; with a second factor the answer is `{secondFactor: true}` and a code must follow.
 * Unknown addresses take as long as known ones (better-auth hashes either way) and get the same sentence.
 */
export async function signIn(headers: Headers, input: { email: string; password: string }): Promise<Response> {
  const address = clientAddress(headers);
  await takeTurn(`sign-in:${input.email}`, 10, 600);
  await takeTurn(`sign-in-address:${address}`, 200, 600);
  const auth = await getAuth();
  const answer = await auth.api.signInEmail({ body: { ...input, rememberMe: true }, headers, asResponse: true });
  if (!answer.ok) {
    await noteFailure('failed sign-in', input.email, address);
    throw wrongPassword();
  }
  const result = (await answer.json()) as { twoFactorRedirect?: boolean };
  return withCookies(answer, { secondFactor: result.twoFactorRedirect === true });
}

async function noteFailure(kind: string, subject: string, address: string): Promise<void> {
  await (
    await getDb()
  )
    .insert(securityEvent)
    .values({ id: randomUUID(), kind, subject: subject.slice(0, 200), address: address.slice(0, 60) });
}

export async function signOut(headers: Headers): Promise<Response> {
  const auth = await getAuth();
  return withCookies(await auth.api.signOut({ headers, asResponse: true }), {});
}

/** A time-based code stays right for up to 90 s; its second use is somebody else's. */
const usedCodeSeconds = 180;
const usedCode = (personId: string, code: string) => `used-code:${personId}:${code}`;

/** Finishes a sign-in with a code of the second factor, or a recovery code. A code works once. */
export async function finishSecondFactor(
  headers: Headers,
  input: { code: string; recovery: boolean },
): Promise<Response> {
  await takeTurn(`second-factor-address:${clientAddress(headers)}`, 100, 600);
  const auth = await getAuth();
  const code = input.code.replace(/\s/g, '');
  const answer = input.recovery
    ? await auth.api.verifyBackupCode({ body: { code }, headers, asResponse: true })
    : await auth.api.verifyTOTP({ body: { code }, headers, asResponse: true });
  const wrong = () =>
    new AppError('invalid', 'The code is not right, or was used already. Wait for the next one and try again.', {
      field: 'code',
    });
  if (!answer.ok) throw wrong();
  const result = (await answer.json()) as { token?: string; user?: { id: string } };
  if (!input.recovery && result.user) {
    try {
      await takeTurn(usedCode(result.user.id, code), 1, usedCodeSeconds);
    } catch (error) {
      if (!(error instanceof AppError)) throw error;
      if (result.token) await endSessionByToken(result.token);
      await noteFailure('second-factor code used again', result.user.id, clientAddress(headers));
      throw wrong();
    }
  }
  return withCookies(answer, {});
}

async function endSessionByToken(sessionToken: string): Promise<void> {
  await (await getDb()).delete(session).where(eq(session.token, sessionToken));
}

/** Always the same answer after the same time, whether the address has an account or not. */
export async function requestReset(headers: Headers, email: string): Promise<object> {
  await takeTurn(`reset:${email}`, 5, 3600);
  await takeTurn(`reset-address:${clientAddress(headers)}`, 60, 3600);
  const auth = await getAuth();
  // Only a known address gets a mail, and writing it takes a few milliseconds that a stranger could measure.
  const pause = new Promise((resolve) => setTimeout(resolve, 500));
  await auth.api.requestPasswordReset({ body: { email } });
  await pause;
  return { sentence: 'If this address has an account, a link is on its way. It works once, for an hour.' };
}

/** Sets a new password by a mailed link; every session ends, and a second factor is still asked for at the next sign-in. */
export async function resetPassword(headers: Headers, input: { token: string; password: string }): Promise<object> {
  await takeTurn(`reset-use:${clientAddress(headers)}`, 60, 3600);
  const auth = await getAuth();
  try {
    await auth.api.resetPassword({ body: { token: input.token, newPassword: input.password } });
  } catch (error) {
    if (!(error instanceof APIError)) throw error;
    throw new AppError('gone', 'This link has expired or was used already. Ask for a new one.', { cause: error });
  }
  return {};
}

/** First step of setting up a second factor: the key for the authenticator and ten recovery codes, shown once. */
export async function beginSecondFactor(headers: Headers, person: Person, password: string): Promise<object> {
  await takeTurn(`password:${person.id}`, 10, 600);
  const auth = await getAuth();
  try {
    const made = await auth.api.enableTwoFactor({ body: { password }, headers });
    if (made.method !== 'totp')
      throw new AppError('internal', 'The second factor could not be set up. Nothing was changed.');
    return { uri: made.totpURI, recoveryCodes: made.backupCodes };
  } catch (error) {
    if (!(error instanceof APIError)) throw error;
    throw new AppError('invalid', 'The password is not right. Nothing was changed.', {
      field: 'password',
      cause: error,
    });
  }
}

/** Second step: a code from the authenticator proves that the key arrived. */
export async function confirmSecondFactor(headers: Headers, person: Person, code: string): Promise<Response> {
  await takeTurn(`second-factor:${person.id}`, 10, 600);
  const auth = await getAuth();
  const answer = await auth.api.verifyTOTP({ body: { code }, headers, asResponse: true });
  if (!answer.ok)
    throw new AppError('invalid', 'The code is not right. Check the clock of the device and try the next code.', {
      field: 'code',
    });
  // Spent: the same code must not sign anybody in while it still stands on the device.
  await takeTurn(usedCode(person.id, code), 1, usedCodeSeconds);
  return withCookies(answer, {});
}

export async function endSecondFactor(headers: Headers, person: Person, password: string): Promise<Response> {
  await takeTurn(`password:${person.id}`, 10, 600);
  const auth = await getAuth();
  const answer = await auth.api.disableTwoFactor({ body: { password }, headers, asResponse: true });
  if (!answer.ok)
    throw new AppError('invalid', 'The password is not right. Nothing was changed.', { field: 'password' });
  const [row] = await (await getDb()).select({ on: user.twoFactorEnabled }).from(user).where(eq(user.id, person.id));
  if (row.on) throw new AppError('internal', 'The second factor is still on. Try again.');
  return withCookies(answer, {});
}
