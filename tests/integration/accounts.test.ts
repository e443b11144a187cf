import { eq, desc } from 'drizzle-orm';
import { afterAll, beforeAll, beforeEach, describe, expect, it } from 'vitest';
import { POST as beginFactor, PUT as confirmFactor, DELETE as endFactor } from '@/app/api/account/second-factor/route';
import { DELETE as endSessionRoute } from '@/app/api/account/sessions/[sessionId]/route';
import { PATCH as accountRoute } from '@/app/api/administration/accounts/[accountId]/route';
import { DELETE as withdrawRoute } from '@/app/api/administration/invitations/[invitationId]/route';
import { POST as inviteRoute } from '@/app/api/administration/invitations/route';
import { POST as joinRoute } from '@/app/api/auth/join/route';
import { POST as codeRoute } from '@/app/api/auth/second-factor/route';
import { POST as signInRoute } from '@/app/api/auth/sign-in/route';
import { GET as notebooksRoute } from '@/app/api/notebooks/route';
import { GET as sessionRoute } from '@/app/api/session/route';
import { listSessions } from '@/server/accounts/service';
import { findPerson } from '@/server/access/person';
import { mailMessage } from '@/server/db/schema/housekeeping';
import { invitation } from '@/server/db/schema/people';
import { call, password, signIn, startLaboratory, type Laboratory, type TestPerson } from './harness';
import * as life from './life';
import { fromBase32, keyOf, totp } from './totp';

let lab: Laboratory;
beforeAll(async () => {
  lab = await startLaboratory();
});
afterAll(() => lab.close());
beforeEach(() => life.forgetTurns(lab));

const cookieOf = (headers: Headers) =>
  headers
    .getSetCookie()
    .map((cookie) => cookie.split(';')[0])
    .join('; ');

async function invited(email: string) {
  const made = await call<{ id: string }>(inviteRoute, {
    as: lab.people.administrator,
    body: { email, name: 'Nils Nyman', role: 'member' },
  });
  // The link is in the mail and nowhere else.
  expect(Object.keys(life.accepted(made))).toEqual(['id']);
  const [mail] = await lab.db
    .select()
    .from(mailMessage)
    .where(eq(mailMessage.recipient, email))
    .orderBy(desc(mailMessage.queuedAt))
    .limit(1);
  const token = /token=(\S+)/.exec(mail.body)?.[1] ?? '';
  return { id: made.body.id, token };
}
const join = (token: string, name = 'Nils Nyman') =>
  call<life.Refusal>(joinRoute, { body: { token, name, password: 'chosen by themself' } });

describe('an invitation', () => {
  it('works once and signs the new person in', async () => {
    const { token } = await invited('nils.nyman@laboratory.example');
    const joined = await join(token);
    expect(joined.status).toBe(200);
    const person = { cookie: cookieOf(joined.headers) } as TestPerson;
    const { body } = await call<{ person: { name: string } }>(sessionRoute, { as: person });
    expect(body.person.name).toBe('Nils Nyman');
    const again = await join(token, 'Somebody Else');
    expect(again).toMatchObject({ status: 410, body: { error: { code: 'gone' } } });
  });

  it('makes one account of two uses at once', async () => {
    const { token } = await invited('twice@laboratory.example');
    const answers = await Promise.all([join(token), join(token)]);
    expect(answers.map((answer) => answer.status).sort()).toEqual([200, 410]);
  });

  it('does not work when expired, withdrawn, replaced by a newer one, or guessed', async () => {
    const expired = await invited('late@laboratory.example');
    await lab.db
      .update(invitation)
      .set({ expiresAt: new Date(Date.now() - 1) })
      .where(eq(invitation.id, expired.id));
    const withdrawn = await invited('withdrawn@laboratory.example');
    await call(withdrawRoute, {
      as: lab.people.administrator,
      method: 'DELETE',
      params: { invitationId: withdrawn.id },
    });
    const older = await invited('replaced@laboratory.example');
    const newer = await invited('replaced@laboratory.example');
    const sentences = new Set<string>();
    for (const token of [expired.token, withdrawn.token, older.token, 'guessed']) {
      const refused = await join(token);
      expect(refused.status).toBe(410);
      sentences.add(refused.body.error.message);
    }
    // One sentence for all: a guessed link learns nothing.
    expect(sentences.size).toBe(1);
    expect((await join(newer.token)).status).toBe(200);
  });

  it('comes from an administrator only', async () => {
    for (const as of [lab.people.lead, lab.people.author, lab.people.outsider]) {
      const refused = await call(inviteRoute, {
        as,
        body: { email: 'x@laboratory.example', name: 'Nils Nyman', role: 'administrator' },
      });
      expect(refused.status).toBe(404);
    }
  });
});

describe('the second factor', () => {
  it('the generator written for these tests gives the values of RFC 6238', () => {
    // RFC 6238, appendix B: SHA-1, 8 digits, key the ASCII text 12345678901234567890.
    const key = Buffer.from('12345678901234567890', 'ascii');
    const vectors: [number, string][] = [
      [59, '94287082'],
      [1111111109, '07081804'],
      [1111111111, '14050471'],
      [1234567890, '89005924'],
      [2000000000, '69279037'],
      [20000000000, '65353130'],
    ];
    for (const [time, code] of vectors) expect(totp(key, time, 8)).toBe(code);
    // RFC 4648, section 10.
    expect(fromBase32('MZXW6YTBOI======').toString()).toBe('foobar');
  });

  it('is asked for after the password once it is set up, and can be ended with the password', async () => {
    const person = await life.newPerson(lab, 'Frida Kode', 'author');
    const wrong = await call(beginFactor, { as: person, body: { password: 'not it' } });
    expect(wrong.status).toBe(422);
    const begun = await call<{ uri: string; recoveryCodes: string[] }>(beginFactor, { as: person, body: { password } });
    expect(begun.body.recoveryCodes).toHaveLength(10);
    expect(new Set(begun.body.recoveryCodes).size).toBe(10);
    const key = keyOf(begun.body.uri);
    // Until a code has proven that the key arrived, nothing is asked for.
    expect(
      (await call<{ secondFactor: boolean }>(signInRoute, { body: { email: person.email, password } })).body,
    ).toEqual({ secondFactor: false });
    const bad = String((Number(totp(key, Date.now() / 1000)) + 1) % 1e6).padStart(6, '0');
    expect((await call(confirmFactor, { as: person, method: 'PUT', body: { code: bad } })).status).toBe(422);
    const code = totp(key, Date.now() / 1000);
    const confirmed = await call(confirmFactor, { as: person, method: 'PUT', body: { code } });
    expect(confirmed.status).toBe(200);
    const now = { ...person, cookie: cookieOf(confirmed.headers) || person.cookie };

    const step = await call(signInRoute, { body: { email: person.email, password } });
    expect(step.body).toEqual({ secondFactor: true });
    const half = { ...person, cookie: cookieOf(step.headers) };
    expect((await call(notebooksRoute, { as: half })).status).toBe(401);
    const recovered = await call(codeRoute, {
      as: half,
      body: { code: begun.body.recoveryCodes[3], recovery: true },
    });
    expect(recovered.status).toBe(200);
    expect((await call(notebooksRoute, { as: { ...person, cookie: cookieOf(recovered.headers) } })).status).toBe(200);

    expect((await call(endFactor, { as: now, method: 'DELETE', body: { password: 'not it' } })).status).toBe(422);
    const ended = await call(endFactor, { as: now, method: 'DELETE', body: { password } });
    expect(ended.status).toBe(200);
    const after = await call(signInRoute, { body: { email: person.email, password } });
    expect(after.body).toEqual({ secondFactor: false });
  });

  it('many wrong codes stop further tries', async () => {
    const person = await life.newPerson(lab, 'Gerd Gjetning', 'author');
    const begun = await call<{ uri: string }>(beginFactor, { as: person, body: { password } });
    const key = keyOf(begun.body.uri);
    const right = () => totp(key, Date.now() / 1000 + 30);
    await call(confirmFactor, { as: person, method: 'PUT', body: { code: totp(key, Date.now() / 1000) } });
    const step = await call(signInRoute, { body: { email: person.email, password } });
    const half = { ...person, cookie: cookieOf(step.headers) };
    for (let i = 0; i < 12; i += 1) {
      const guess = String((Number(right()) + 17 + i) % 1e6).padStart(6, '0');
      expect((await call(codeRoute, { as: half, body: { code: guess, recovery: false } })).status).not.toBe(200);
    }
    // The guesser's own sign-in is used up; a fresh one must not open the count anew at once.
    const code = right();
    expect((await call(codeRoute, { as: half, body: { code, recovery: false } })).status).not.toBe(200);
  });
});

describe('sessions', () => {
  it('end at once when the person ends them, and nobody else’s', async () => {
    const { author, outsider } = lab.people;
    const other = { ...author, cookie: await signIn(author.email) };
    const person = await findPerson(new Headers({ cookie: author.cookie }));
    const lines = await listSessions(person!);
    const theirs = lines.find((line) => !line.current);
    const end = (as: TestPerson) => call(endSessionRoute, { as, method: 'DELETE', params: { sessionId: theirs!.id } });
    await end(outsider);
    expect((await call(notebooksRoute, { as: other })).status).toBe(200);
    await end(author);
    expect((await call(notebooksRoute, { as: other })).status).toBe(401);
    expect((await call(notebooksRoute, { as: author })).status).toBe(200);
  });
});

describe('closing an account', () => {
  it('ends its sessions, keeps its name on what it wrote, and is undone by opening it', async () => {
    const { administrator, lead } = lab.people;
    const person = await life.newPerson(lab, 'Pia Parting', 'author');
    const id = await life.create(person);
    await life.write(person, id, 'Written before leaving.');
    const change = (disabled: boolean) =>
      call(accountRoute, {
        as: administrator,
        method: 'PATCH',
        params: { accountId: person.id },
        body: { disabled },
      });
    expect((await change(true)).status).toBe(200);
    expect((await call(notebooksRoute, { as: person })).status).toBe(401);
    expect((await life.read(lead, id)).author.name).toBe('Pia Parting');
    expect((await change(false)).status).toBe(200);
    // The old cookie stays ended; a new sign-in works.
    expect((await call(notebooksRoute, { as: person })).status).toBe(401);
    expect((await call(notebooksRoute, { as: { ...person, cookie: await signIn(person.email) } })).status).toBe(200);
  });

  it('is not done to oneself, so that nobody locks the laboratory out', async () => {
    const { administrator } = lab.people;
    const refused = await call(accountRoute, {
      as: administrator,
      method: 'PATCH',
      params: { accountId: administrator.id },
      body: { disabled: true },
    });
    expect(refused.status).toBe(403);
  });
});
