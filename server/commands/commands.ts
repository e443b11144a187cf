import 'server-only';
import { eq } from 'drizzle-orm';
import { emailSchema, personNameSchema } from '@/lib/schemas/person';
import { invite, makeToken } from '@/server/accounts/service';
import { openDatabase } from '@/server/db/client';
import { user } from '@/server/db/schema/people';

export type Command = (args: string[]) => Promise<string[]>;

/** Commands that need the database. Each returns the lines to print; a sentence is thrown. */
export const commands: Record<string, Command> = {
  /** `token EMAIL`: one personal token, and nothing else. */
  token: async ([address]) => {
    const { db } = await openDatabase();
    const email = emailSchema.parse(address ?? '');
    const [person] = await db.select({ id: user.id }).from(user).where(eq(user.email, email));
    if (!person) throw new Error(`Nobody with the address ${email} has an account.`);
    return [(await makeToken(person.id, 'made on the command line')).secret];
  },
  /** `invite EMAIL "FULL NAME" [administrator]`: a link to join, for whoever has no mail server yet. */
  invite: async ([address, name, role]) => {
    const { link } = await invite(null, {
      email: emailSchema.parse(address ?? ''),
      name: personNameSchema.parse(name ?? ''),
      role: role === 'administrator' ? 'administrator' : 'member',
    });
    return [link];
  },
  /** `maintain`: flush, keep a copy of the database beside the journal, and tidy up. */
  maintain: async () => {
    const opened = await openDatabase();
    await opened.vacuum();
    await opened.maintain();
    return ['A flushed copy of the database is kept beside the journal.'];
  },
};
