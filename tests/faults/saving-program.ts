import { randomUUID } from 'node:crypto';
import { eq } from 'drizzle-orm';
import type { NodeJson } from '@/lib/document/json';
import type { Person } from '@/server/access/person';
import { createAccount } from '@/server/accounts/service';
import { openDatabase, type Db } from '@/server/db/client';
import { entry } from '@/server/db/schema/entries';
import { user } from '@/server/db/schema/people';
import { readDraft, saveDraft } from '@/server/entries/draft-service';
import { insertEntry } from '@/server/entries/service';
import { insertNotebook } from '@/server/notebooks/service';

/** Opens the data folder, says which text it finds, and saves one after another, naming each that was acknowledged. */

const print = (line: string) => process.stdout.write(`${line}\n`);

async function prepare(db: Db): Promise<void> {
  const [known] = await db.select().from(user).limit(1);
  if (known) return;
  await db.transaction(async (tx) => {
    const id = await createAccount(tx, {
      email: 'saver@laboratory.example',
      name: 'Saver Child',
      role: 'member',
      passwordHash: 'none',
      actorId: null,
    });
    const notebookId = randomUUID();
    await insertNotebook(tx, { id: notebookId, code: 'NB-01', title: 'Saves', description: '', leadId: id });
    await insertEntry(tx, {
      notebookId,
      authorId: id,
      title: '0',
      workDate: '2031-03-04',
      cooldownId: null,
      deviceIds: [],
      doc: { type: 'doc', content: blocks(0) },
      requestKey: null,
      at: new Date(),
    });
  });
}

/** Three copies of one number far apart in the text: half a save would show two numbers. */
function blocks(number: number): NodeJson[] {
  const block = (id: string, text: string): NodeJson => ({
    type: 'paragraph',
    attrs: { id },
    content: [{ type: 'text', text }],
  });
  const filler = Array.from({ length: 40 }, (_, i) => block(`filler_${i}`, `${number} `.repeat(20)));
  return [block('first_block', String(number)), ...filler, block('last_block', String(number))];
}

const { db, report } = await openDatabase();
await prepare(db);
const [about] = await db.select().from(entry).limit(1);
const [row] = await db.select().from(user).where(eq(user.id, about.authorId));
const person: Person = {
  id: row.id,
  name: row.name,
  email: row.email,
  initials: 'SC',
  role: 'member',
  twoFactor: false,
  by: 'session',
  sessionId: null,
  sessionStartedAt: null,
};
const draft = await readDraft(about.id);
const numbers = new Set(JSON.stringify(draft.doc).match(/(?<=[" ])\d+(?=[" ])/g));
print(
  `found ${JSON.stringify({ numbers: [...numbers], title: draft.title, revision: draft.revision, listed: about.title, replayed: report.replayed })}`,
);
let revision = draft.revision;
for (let number = Number(draft.title) + 1; ; number += 1) {
  const saved = await saveDraft(about.id, person, {
    basedOn: revision,
    title: String(number),
    doc: { type: 'doc', content: blocks(number) },
    written: {},
    clockOffsetMs: 0,
    saveId: randomUUID(),
  });
  revision = saved.revision;
  print(`saved ${number}`);
}
