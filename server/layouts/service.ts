import 'server-only';
import { randomUUID } from 'node:crypto';
import { and, asc, eq } from 'drizzle-orm';
import { z } from 'zod';
import { documentOfLayout, layouts, structureOf } from '@/lib/document/layouts';
import type { DocumentJson } from '@/lib/document/json';
import { AppError } from '@/lib/errors/app-error';
import type { ScopeOf } from '@/server/access/scope';
import { getDb, type DbOrTx } from '@/server/db/client';
import { entry, entryDraft } from '@/server/db/schema/entries';
import { layout } from '@/server/db/schema/notebooks';

export type LayoutLine = { key: string; name: string; about: string };

/** The built-in layouts and those that leads of the notebook have saved. */
export async function listLayouts(notebookId: string): Promise<LayoutLine[]> {
  const rows = await (
    await getDb()
  )
    .select({ id: layout.id, name: layout.name })
    .from(layout)
    .where(eq(layout.notebookId, notebookId))
    .orderBy(asc(layout.name));
  return [
    ...layouts.map(({ key, name, about }) => ({ key, name, about })),
    ...rows.map((row) => ({ key: row.id, name: row.name, about: 'Saved in this notebook' })),
  ];
}

/** @throws AppError invalid for a layout that this notebook does not have. */
export async function layoutDocument(db: DbOrTx, notebookId: string, key: string): Promise<DocumentJson> {
  if (layouts.some((known) => known.key === key)) return documentOfLayout(key);
  const [row] = z.uuid().safeParse(key).success
    ? await db
        .select({ doc: layout.doc })
        .from(layout)
        .where(and(eq(layout.id, key), eq(layout.notebookId, notebookId)))
    : [];
  if (!row) throw new AppError('invalid', 'This notebook has no such layout.', { field: 'layout' });
  return structureOf(row.doc);
}

export const saveLayoutSchema = z
  .object({ entryId: z.uuid(), name: z.string().trim().min(1, 'A layout needs a name.').max(80) })
  .strict();

/** Saves the structure of an entry of this notebook: headings, empty tables, unchecked lists; never its text. */
export async function saveLayout(
  scope: ScopeOf<'layout.save'>,
  input: z.infer<typeof saveLayoutSchema>,
): Promise<{ id: string }> {
  const db = await getDb();
  const [row] = await db
    .select({ doc: entryDraft.doc })
    .from(entryDraft)
    .innerJoin(entry, and(eq(entry.id, entryDraft.entryId), eq(entry.notebookId, scope.notebook.id)))
    .where(eq(entryDraft.entryId, input.entryId));
  if (!row) throw new AppError('invalid', 'This entry is not one of this notebook.');
  const id = randomUUID();
  await db.insert(layout).values({
    id,
    notebookId: scope.notebook.id,
    name: input.name,
    doc: structureOf(row.doc),
    createdBy: scope.person.id,
  });
  return { id };
}
