import { openDB, type IDBPDatabase } from 'idb';
import type { KeptDraft } from '@/lib/draft/contract';

/**
 * Unsent text in the browser's own store, by person, entry and window. A person reads only keys that begin with their
 * own id; another sign-in on the same computer never asks for them.
 */
const name = 'kelvinleaf-drafts';
const table = 'drafts';

let opened: Promise<IDBPDatabase> | null = null;

function database(): Promise<IDBPDatabase> {
  opened ??= openDB(name, 1, {
    upgrade: (db) => {
      db.createObjectStore(table, { keyPath: 'key' });
    },
    terminated: () => {
      opened = null;
    },
  }).catch((error: unknown) => {
    opened = null;
    throw error;
  });
  return opened;
}

const prefix = (personId: string, entryId?: string) => `${personId}/${entryId === undefined ? '' : `${entryId}/`}`;
const range = (start: string) => IDBKeyRange.bound(start, `${start}\uffff`);

export async function keepDraft(draft: Omit<KeptDraft, 'key'>): Promise<void> {
  const db = await database();
  await db.put(table, {
    ...draft,
    key: `${prefix(draft.personId, draft.entryId)}${draft.windowId}`,
  } satisfies KeptDraft);
}

export async function forgetDraft(personId: string, entryId: string, windowId: string): Promise<void> {
  const db = await database();
  await db.delete(table, `${prefix(personId, entryId)}${windowId}`);
}

/** What windows of this person kept of an entry, newest first. */
export async function keptDrafts(personId: string, entryId: string): Promise<KeptDraft[]> {
  const db = await database();
  const kept = (await db.getAll(table, range(prefix(personId, entryId)))) as KeptDraft[];
  return kept.sort((a, b) => b.keptAt.localeCompare(a.keptAt));
}

/** Entries of which this person has text here that the server does not have: to ask about before signing out. */
export async function unsentDrafts(personId: string): Promise<{ entryId: string; title: string; keptAt: string }[]> {
  const db = await database();
  const kept = (await db.getAll(table, range(prefix(personId)))) as KeptDraft[];
  return kept.map(({ entryId, title, keptAt }) => ({ entryId, title, keptAt }));
}

/** Windows that are open now hold a lock of their id; what a closed one kept is free to be taken up. */
export async function openWindows(): Promise<Set<string>> {
  if (typeof navigator === 'undefined' || !navigator.locks) return new Set();
  const { held } = await navigator.locks.query();
  return new Set(
    (held ?? []).flatMap((lock) => (lock.name?.startsWith(`${name}/`) ? [lock.name.slice(name.length + 1)] : [])),
  );
}

/** Marks this window as open until it is closed or `release` is called. */
export function holdWindow(windowId: string): () => void {
  if (typeof navigator === 'undefined' || !navigator.locks) return () => undefined;
  let release: () => void = () => undefined;
  const until = new Promise<void>((resolve) => {
    release = resolve;
  });
  navigator.locks.request(`${name}/${windowId}`, () => until).catch(() => undefined);
  return release;
}
