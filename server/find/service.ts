import 'server-only';
import { and, desc, eq, sql } from 'drizzle-orm';
import { getDb } from '@/server/db/client';
import { entry } from '@/server/db/schema/entries';
import { cooldown, device } from '@/server/db/schema/laboratory';
import { notebook, notebookMember } from '@/server/db/schema/notebooks';

export type Found = { kind: 'entry' | 'notebook' | 'device' | 'cooldown'; title: string; detail: string; href: string };

/** What a person may open whose words or name match; words are matched from their beginning. */
export async function find(personId: string, text: string): Promise<Found[]> {
  const words =
    text
      .normalize('NFC')
      .match(/[\p{L}\p{N}]+/gu)
      ?.slice(0, 12) ?? [];
  if (words.length === 0) return [];
  const db = await getDb();
  // Only letters and digits reach the query, so no operator of the text search can be written here.
  const query = words.map((word) => `${word}:*`).join(' & ');
  const like = `%${text.replace(/[\\%_]/g, (c) => `\\${c}`)}%`;
  const mine = (notebookId: typeof entry.notebookId | typeof device.notebookId | typeof cooldown.notebookId) =>
    and(eq(notebookMember.notebookId, notebookId), eq(notebookMember.userId, personId));
  const entries = await db
    .select({ id: entry.id, title: entry.title, leaf: entry.leaf, code: notebook.code, workDate: entry.workDate })
    .from(entry)
    .innerJoin(notebook, eq(notebook.id, entry.notebookId))
    .innerJoin(notebookMember, mine(entry.notebookId))
    .where(sql`to_tsvector('simple', ${entry.words}) @@ to_tsquery('simple', ${query})`)
    .orderBy(desc(entry.workDate))
    .limit(20);
  const notebooks = await db
    .select({ code: notebook.code, title: notebook.title })
    .from(notebook)
    .innerJoin(notebookMember, and(eq(notebookMember.notebookId, notebook.id), eq(notebookMember.userId, personId)))
    .where(sql`${notebook.code} ILIKE ${like} OR ${notebook.title} ILIKE ${like}`)
    .limit(5);
  const devices = await db
    .select({ id: device.id, name: device.name, material: device.material })
    .from(device)
    .innerJoin(notebookMember, mine(device.notebookId))
    .where(sql`${device.name} ILIKE ${like}`)
    .limit(5);
  const cooldowns = await db
    .select({ id: cooldown.id, name: cooldown.name, cryostat: cooldown.cryostat })
    .from(cooldown)
    .innerJoin(notebookMember, mine(cooldown.notebookId))
    .where(sql`${cooldown.name} ILIKE ${like}`)
    .limit(5);
  return [
    ...notebooks.map((n) => ({
      kind: 'notebook' as const,
      title: `${n.code} ${n.title}`,
      detail: 'notebook',
      href: `/notebooks/${n.code}`,
    })),
    ...entries.map((e) => ({
      kind: 'entry' as const,
      title: e.title,
      detail: `${e.code} leaf ${e.leaf}, ${e.workDate}`,
      href: `/entries/${e.id}`,
    })),
    ...devices.map((d) => ({
      kind: 'device' as const,
      title: d.name,
      detail: `device, ${d.material}`,
      href: `/devices/${d.id}`,
    })),
    ...cooldowns.map((c) => ({
      kind: 'cooldown' as const,
      title: c.name,
      detail: `cooldown in ${c.cryostat}`,
      href: `/cooldowns/${c.id}`,
    })),
  ];
}
