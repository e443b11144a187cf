import { createHash, randomUUID } from 'node:crypto';
import { desc, eq, sql } from 'drizzle-orm';
import { afterAll, beforeAll, beforeEach, describe, expect, it } from 'vitest';
import { PUT as passwordRoute } from '@/app/api/account/password/route';
import { POST as beginFactor, PUT as confirmFactor } from '@/app/api/account/second-factor/route';
import { PATCH as accountRoute } from '@/app/api/administration/accounts/[accountId]/route';
import { POST as forgottenRoute } from '@/app/api/auth/forgotten/route';
import { POST as resetRoute } from '@/app/api/auth/reset/route';
import { POST as codeRoute } from '@/app/api/auth/second-factor/route';
import { POST as signInRoute } from '@/app/api/auth/sign-in/route';
import { POST as signOutRoute } from '@/app/api/auth/sign-out/route';
import { GET as notebooksRoute } from '@/app/api/notebooks/route';
import { GET as sessionRoute } from '@/app/api/session/route';
import { passwordSchema } from '@/lib/schemas/person';
import { safePath } from '@/server/access/page';
import { makeToken } from '@/server/accounts/service';
import { checkPassword, hashPassword } from '@/server/auth/password';
import { mailMessage, rateCount, securityEvent } from '@/server/db/schema/housekeeping';
import { account, session, user, verification } from '@/server/db/schema/people';
import { forgetEnv } from '@/server/env/env';
import {
  call,
  cheapHash,
  origin,
  password,
  startLaboratory,
  type Laboratory,
  type TestPerson,
} from '../integration/harness';
import * as life from '../integration/life';
import { keyOf, totp } from '../integration/totp';

let lab: Laboratory;
beforeAll(async () => {
  lab = await startLaboratory();
});
afterAll(() => lab.close());
beforeEach(() => life.forgetTurns(lab));

type Body = life.Refusal & { secondFactor?: boolean };
const trySignIn = (email: string, word: string, headers: Record<string, string> = {}) =>
  call<Body>(signInRoute, { body: { email, password: word }, headers });
const cookieOf = (headers: Headers) =>
  headers
    .getSetCookie()
    .map((cookie) => cookie.split(';')[0])
    .join('; ');
const asCookie = (person: TestPerson, cookie: string): TestPerson => ({ ...person, cookie });
const opens = async (person: TestPerson) => (await call(notebooksRoute, { as: person })).status;
const forgotten = (email: string, headers: Record<string, string> = {}) =>
  call<{ sentence: string }>(forgottenRoute, { body: { email }, headers });
const reset = (token: string, word: string) => call<life.Refusal>(resetRoute, { body: { token, password: word } });

async function resetLink(email: string): Promise<string> {
  const [mail] = await lab.db
    .select()
    .from(mailMessage)
    .where(eq(mailMessage.recipient, email))
    .orderBy(desc(mailMessage.queuedAt))
    .limit(1);
  const link = /https?:\S+/.exec(mail.body)?.[0];
  if (!link) throw new Error(`no link in the mail to ${email}`);
  return link;
}
const tokenOf = (link: string) => new URL(link).searchParams.get('token') ?? '';

/** Puts the cheap test password back. */
async function restorePassword(person: TestPerson): Promise<void> {
  await lab.db.update(account).set({ password: cheapHash() }).where(eq(account.userId, person.id));
}

describe('sign-in', () => {
  it('1 a burst of wrong passwords is refused per account, and the right one too until the time is over', async () => {
    const { reader } = lab.people;
    for (let i = 0; i < 10; i += 1) expect((await trySignIn(reader.email, `wrong ${i}`)).status).toBe(422);
    const refused = await trySignIn(reader.email, password);
    expect(refused.status).toBe(429);
    expect(refused.body.error.message).toBe('Too many tries. Wait 10 minutes, then try again.');
    // Others are not kept out, and ten minutes later the account is open again.
    expect((await trySignIn(lab.people.second.email, password)).status).toBe(200);
    await lab.db.update(rateCount).set({ windowStart: new Date(Date.now() - 601_000) });
    expect((await trySignIn(reader.email, password)).status).toBe(200);
    const noted = await lab.db.select().from(securityEvent).where(eq(securityEvent.subject, reader.email));
    expect(noted.filter((event) => event.kind === 'failed sign-in')).toHaveLength(10);
  });

  it('1 a burst over many accounts is refused per address', async () => {
    process.env.TRUSTED_PROXIES = '1';
    forgetEnv();
    try {
      const from = (address: string) => ({ 'x-forwarded-for': address });
      expect((await trySignIn('nobody1@laboratory.example', 'x', from('203.0.113.7'))).status).toBe(422);
      // 199 more tries, written straight into the count: each real one takes the full time of a password check.
      const key = createHash('sha256').update('sign-in-address:203.0.113.7').digest('hex');
      const counted = await lab.db.update(rateCount).set({ count: 200 }).where(eq(rateCount.key, key)).returning();
      expect(counted).toHaveLength(1);
      expect((await trySignIn('nobody2@laboratory.example', 'x', from('203.0.113.7'))).status).toBe(429);
      expect((await trySignIn('nobody3@laboratory.example', 'x', from('203.0.113.8'))).status).toBe(422);
    } finally {
      delete process.env.TRUSTED_PROXIES;
      forgetEnv();
    }
  });

  it('2 an unknown address, a wrong password and a closed account are told apart by nothing in the answer', async () => {
    const { second, witness } = lab.people;
    await lab.db.update(user).set({ disabledAt: new Date() }).where(eq(user.id, witness.id));
    const answers = [
      await trySignIn('nobody@laboratory.example', password),
      await trySignIn(second.email, 'not the password'),
      await trySignIn(witness.email, password),
    ];
    await lab.db.update(user).set({ disabledAt: null }).where(eq(user.id, witness.id));
    for (const answer of answers) {
      expect(answer.status).toBe(422);
      expect(answer.body).toEqual(answers[0].body);
      expect(answer.headers.getSetCookie()).toEqual([]);
    }
  });

  it('2 an unknown address takes as long as a wrong password', async () => {
    const { second } = lab.people;
    await lab.db
      .update(account)
      .set({ password: await hashPassword(password) })
      .where(eq(account.userId, second.id));
    const time = async (email: string) => {
      const start = performance.now();
      await trySignIn(email, 'not the password');
      return performance.now() - start;
    };
    const known: number[] = [];
    const unknown: number[] = [];
    for (let i = 0; i < 5; i += 1) {
      known.push(await time(second.email));
      unknown.push(await time('nobody@laboratory.example'));
    }
    await restorePassword(second);
    // The best of five: a busy machine only ever adds. Without the hash an unknown address would answer some 20 times faster.
    expect(Math.min(...unknown)).toBeGreaterThan(Math.min(...known) / 2);
  });

  it('2 asking for a reset answers the same, after the same time, whether the address is known or not', async () => {
    const { second } = lab.people;
    const timed = async (email: string) => {
      const start = performance.now();
      const answer = await forgotten(email);
      return { ...answer, ms: performance.now() - start };
    };
    const known = await timed(second.email);
    const unknown = await timed('nobody@laboratory.example');
    expect([unknown.status, unknown.body]).toEqual([known.status, known.body]);
    for (const answer of [known, unknown]) expect(answer.ms).toBeGreaterThan(450);
    const mails = await lab.db.select().from(mailMessage).where(eq(mailMessage.recipient, 'nobody@laboratory.example'));
    expect(mails).toEqual([]);
  });

  it('3 a cookie that was there before the sign-in is not taken over', async () => {
    const { second } = lab.people;
    const planted = 'kelvinleaf=planted-by-somebody-else.c2lnbmF0dXJl';
    const answer = await trySignIn(second.email, password, { cookie: planted });
    expect(cookieOf(answer.headers)).not.toContain('planted');
    expect(await opens(asCookie(second, planted))).toBe(401);
    expect(await opens(asCookie(second, cookieOf(answer.headers)))).toBe(200);
    const attributes = answer.headers.getSetCookie().find((cookie) => cookie.startsWith('kelvinleaf='));
    expect(attributes).toMatch(/HttpOnly/i);
    expect(attributes).toMatch(/SameSite=Lax/i);
    // An attacker's own session, planted in the victim's browser, ends nowhere near the victim's new one.
    const again = await trySignIn(second.email, password, { cookie: lab.people.outsider.cookie });
    expect(cookieOf(again.headers)).not.toBe(lab.people.outsider.cookie);
  });

  it('4 a cookie opens nothing after signing out', async () => {
    const { second } = lab.people;
    const mine = asCookie(second, cookieOf((await trySignIn(second.email, password)).headers));
    expect(await opens(mine)).toBe(200);
    await call(signOutRoute, { as: mine, method: 'POST' });
    expect(await opens(mine)).toBe(401);
    expect((await call<{ person: unknown }>(sessionRoute, { as: mine })).body.person).toBeNull();
  });

  it('5 cookies of other browsers open nothing after a change of password, and the old password neither', async () => {
    const { second } = lab.people;
    const stolen = asCookie(second, cookieOf((await trySignIn(second.email, password)).headers));
    const next = 'changed, long enough';
    const changed = await call(passwordRoute, { as: second, method: 'PUT', body: { current: password, next } });
    expect(changed.status).toBe(200);
    expect(await opens(stolen)).toBe(401);
    expect(await opens(second)).toBe(200);
    expect((await trySignIn(second.email, password)).status).toBe(422);
    await restorePassword(second);
  });

  it('6 cookies and tokens open nothing from the moment an account is closed', async () => {
    const { administrator } = lab.people;
    const person = await life.newPerson(lab, 'Clara Closed', 'author');
    const { secret } = await makeToken(person.id, 'cryostat');
    const byToken = { headers: { authorization: `Bearer ${secret}` } };
    expect((await call(notebooksRoute, byToken)).status).toBe(200);
    const closed = await call(accountRoute, {
      as: administrator,
      method: 'PATCH',
      params: { accountId: person.id },
      body: { disabled: true },
    });
    expect(closed.status).toBe(200);
    expect(await opens(person)).toBe(401);
    expect((await call(notebooksRoute, byToken)).status).toBe(401);
    expect((await trySignIn(person.email, password)).status).toBe(422);
    // Even where a session row was left behind.
    await lab.db.insert(session).values({
      id: randomUUID(),
      token: 'left-behind',
      userId: person.id,
      expiresAt: new Date(Date.now() + 60_000),
    });
    expect(await opens(person)).toBe(401);
  });
});

describe('second factor', () => {
  it('7, 10 a code works once, setting up included; a reset of the password does not skip it', async () => {
    const person = await life.newPerson(lab, 'Tova Faktor', 'author');
    const begun = await call<{ uri: string; recoveryCodes: string[] }>(beginFactor, {
      as: person,
      body: { password },
    });
    const key = keyOf(begun.body.uri);
    const at = (seconds = 0) => totp(key, Date.now() / 1000 + seconds);
    const first = at();
    const confirmed = await call(confirmFactor, { as: person, method: 'PUT', body: { code: first } });
    expect(confirmed.status).toBe(200);

    const half = async () => {
      const step = await trySignIn(person.email, password);
      expect(step.body).toEqual({ secondFactor: true });
      return asCookie(person, cookieOf(step.headers));
    };
    const finish = async (as: TestPerson, code: string, recovery = false) => {
      const answer = await call<Body>(codeRoute, { as, body: { code, recovery } });
      return { ...answer, cookie: cookieOf(answer.headers) };
    };
    // The password alone opens nothing.
    expect(await opens(await half())).toBe(401);
    // The code that set it up is spent.
    expect((await finish(await half(), first)).status).toBe(422);
    const next = at(30);
    const good = await finish(await half(), next);
    expect(good.status).toBe(200);
    expect(await opens(asCookie(person, good.cookie))).toBe(200);
    const sessionsBefore = await lab.db.select().from(session).where(eq(session.userId, person.id));
    const replayed = await finish(await half(), next);
    expect(replayed.status).toBe(422);
    expect(replayed.cookie).not.toMatch(/kelvinleaf=[^;]/);
    expect(await lab.db.select().from(session).where(eq(session.userId, person.id))).toHaveLength(
      sessionsBefore.length,
    );
    // A recovery code works once too.
    const [recovery] = begun.body.recoveryCodes;
    expect((await finish(await half(), recovery, true)).status).toBe(200);
    expect((await finish(await half(), recovery, true)).status).toBe(422);

    // 10: a new password by mail ends every session and gives none; the next sign-in still asks for the code.
    await forgotten(person.email);
    const answer = await reset(tokenOf(await resetLink(person.email)), 'set by mail, long');
    expect(answer.status).toBe(200);
    expect(answer.headers.getSetCookie()).toEqual([]);
    expect(await lab.db.select().from(session).where(eq(session.userId, person.id))).toEqual([]);
    const step = await trySignIn(person.email, 'set by mail, long');
    expect(step.body).toEqual({ secondFactor: true });
    expect(await opens(asCookie(person, cookieOf(step.headers)))).toBe(401);
  });
});

describe('reset by mail', () => {
  it('8 a link works once and for an hour', async () => {
    const { second } = lab.people;
    await forgotten(second.email);
    const token = tokenOf(await resetLink(second.email));
    expect((await reset(token, 'short')).status).toBe(422);
    expect((await reset(token, 'first new password')).status).toBe(200);
    expect((await reset(token, 'second new password')).status).toBe(410);
    expect((await trySignIn(second.email, 'first new password')).status).toBe(200);

    await forgotten(second.email);
    const late = tokenOf(await resetLink(second.email));
    expect(late).not.toBe(token);
    await lab.db.update(verification).set({ expiresAt: new Date(Date.now() - 1000) });
    expect((await reset(late, 'third new password')).status).toBe(410);
    expect((await reset('guessed', 'third new password')).status).toBe(410);
    await restorePassword(second);
  });

  it('9 the link is built from the address of the installation, whatever the request’s headers say', async () => {
    const { author } = lab.people;
    await forgotten(author.email, {
      host: 'evil.example',
      'x-forwarded-host': 'evil.example',
      'x-forwarded-proto': 'https',
      forwarded: 'host=evil.example',
    });
    expect(await resetLink(author.email)).toMatch(new RegExp(`^${origin}/reset\\?token=`));
  });
});

describe('limits and forms', () => {
  it('11 a forged X-Forwarded-For evades neither the limit per account nor that per address', async () => {
    const { lead } = lab.people;
    const statuses: number[] = [];
    for (let i = 0; i < 11; i += 1) {
      statuses.push((await trySignIn(lead.email, 'wrong', { 'x-forwarded-for': `198.51.100.${i}` })).status);
    }
    expect(statuses).toEqual([...Array<number>(10).fill(422), 429]);
    const [byAddress] = await lab.db
      .select()
      .from(rateCount)
      .where(eq(rateCount.key, createHash('sha256').update('sign-in-address:direct').digest('hex')));
    // The eleventh try was stopped by the account's limit before it was counted for the address.
    expect(byAddress.count).toBe(10);
    process.env.TRUSTED_PROXIES = '1';
    forgetEnv();
    try {
      await life.forgetTurns(lab);
      // The proxy appends the true address; what stands before it is the caller's own word.
      for (const forged of ['10.0.0.1', '10.0.0.2'])
        await trySignIn('nobody@laboratory.example', 'x', { 'x-forwarded-for': `${forged}, 203.0.113.9` });
      const [row] = await lab.db
        .select()
        .from(rateCount)
        .where(eq(rateCount.key, createHash('sha256').update('sign-in-address:203.0.113.9').digest('hex')));
      expect(row.count).toBe(2);
    } finally {
      delete process.env.TRUSTED_PROXIES;
      forgetEnv();
    }
  });

  it('12 long and Unicode passwords are neither cut short nor confused', async () => {
    const long = 'p'.repeat(127);
    const hash = await hashPassword(`${long}a`);
    expect(await checkPassword({ hash, password: `${long}a` })).toBe(true);
    expect(await checkPassword({ hash, password: `${long}b` })).toBe(false);
    expect(await checkPassword({ hash, password: long })).toBe(false);
    const unicode = await hashPassword('Ångström·über·µ·🧊\u0000after');
    expect(await checkPassword({ hash: unicode, password: 'Ångström·über·µ·🧊\u0000after'.normalize('NFD') })).toBe(
      true,
    );
    expect(await checkPassword({ hash: unicode, password: 'Ångström·über·µ·🧊\u0000other' })).toBe(false);
    expect(await checkPassword({ hash: unicode, password: 'Ångström·über·µ·🧊' })).toBe(false);
    expect(passwordSchema.safeParse('x'.repeat(128)).success).toBe(true);
    expect(passwordSchema.safeParse('x'.repeat(129)).success).toBe(false);
    expect(passwordSchema.safeParse('1234567').success).toBe(false);
    expect(passwordSchema.safeParse('Password123').success).toBe(false);
    // scrypt at the cost that OWASP's password storage cheat sheet names: N = 2^15, r = 8, p = 3.
    expect(hash.split('$').slice(0, 4)).toEqual(['scrypt', '32768', '8', '3']);
  });

  it('13 the way back after signing in never leads to another site', () => {
    for (const hostile of [
      '//evil.example',
      '/\\evil.example',
      '\\\\evil.example',
      'https://evil.example',
      'javascript:alert(1)',
      '/\t/evil.example',
      '/\n/evil.example',
      ' //evil.example',
      '/%09/evil.example',
      '',
    ])
      expect([hostile, safePath(hostile)]).toEqual([hostile, '/']);
    expect(safePath('/entries/1?x=2')).toBe('/entries/1?x=2');
    expect(safePath(undefined)).toBe('/');
  });

  it('a stranger’s failed tries grow the security log, not the record’s', async () => {
    const count = async () =>
      Number((await lab.db.execute<{ n: string }>(sql`SELECT count(*) AS n FROM log_record`)).rows[0].n);
    const before = await count();
    await trySignIn('nobody@laboratory.example', 'x');
    expect(await count()).toBe(before);
  });
});
