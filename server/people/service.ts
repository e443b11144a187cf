import 'server-only';
import { inArray } from 'drizzle-orm';
import type { PersonDto } from '@/lib/schemas/entry';
import { initialsOf } from '@/lib/schemas/person';
import type { DbOrTx } from '@/server/db/client';
import { user } from '@/server/db/schema/people';

/** Printed names of people by id; every id given is in the result. */
export async function peopleById(db: DbOrTx, ids: Iterable<string>): Promise<Map<string, PersonDto>> {
  const wanted = [...new Set(ids)];
  if (wanted.length === 0) return new Map();
  const rows = await db.select({ id: user.id, name: user.name }).from(user).where(inArray(user.id, wanted));
  return new Map(rows.map((row) => [row.id, { ...row, initials: initialsOf(row.name) }]));
}

export const toPersonDto = (person: { id: string; name: string }): PersonDto => ({
  id: person.id,
  name: person.name,
  initials: initialsOf(person.name),
});

/** E-mail addresses, for mails only; never sent to a browser. */
export async function addressesOf(db: DbOrTx, ids: Iterable<string>): Promise<Map<string, string>> {
  const wanted = [...new Set(ids)];
  if (wanted.length === 0) return new Map();
  const rows = await db.select({ id: user.id, email: user.email }).from(user).where(inArray(user.id, wanted));
  return new Map(rows.map((row) => [row.id, row.email]));
}
