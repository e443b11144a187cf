import 'server-only';
import { now } from '@/server/clock/service';
import { and, eq, isNull } from 'drizzle-orm';
import { checkDocument } from '@/lib/document/check';
import { documentText } from '@/lib/document/text';
import { AppError } from '@/lib/errors/app-error';
import type { DraftDto, SaveDraft } from '@/lib/schemas/entry';
import type { Person } from '@/server/access/person';
import { getDb, type DbOrTx } from '@/server/db/client';
import { entry, entryContributor, entryDraft } from '@/server/db/schema/entries';
import { peopleById } from '@/server/people/service';
import { findDraft, lockEntry, type DraftRow } from './queries';
import { refuseFrozen } from './states';
import { nextStamps } from './stamps';

export async function readDraft(entryId: string): Promise<DraftDto> {
  const db = await getDb();
  return toDraftDto(db, await findDraft(db, entryId));
}

async function toDraftDto(db: DbOrTx, draft: DraftRow): Promise<DraftDto> {
  const people = await peopleById(db, [draft.savedBy]);
  return {
    entryId: draft.entryId,
    revision: draft.revision,
    title: draft.title,
    doc: draft.doc,
    stamps: draft.stamps,
    savedAt: draft.savedAt.toISOString(),
    savedBy: people.get(draft.savedBy)!,
  };
}

export type Saved = Pick<DraftDto, 'revision' | 'savedAt' | 'stamps'>;

/**
 * Stores the draft as its next revision.
 * Guarantee: a save that was answered is kept; a repeated `saveId` is answered as the first one and stored once.
 * @throws AppError conflict with `details.current` where another window or person was faster; frozen after signing.
 */
export async function saveDraft(entryId: string, person: Person, save: SaveDraft): Promise<Saved> {
  const doc = checkDocument(save.doc);
  const db = await getDb();
  return db.transaction(async (tx) => {
    const row = await lockEntry(tx, entryId);
    refuseFrozen(row.state);
    const draft = await findDraft(tx, entryId);
    if (draft.lastSaveId === save.saveId) return savedFrom(draft);
    if (draft.revision !== save.basedOn) {
      throw new AppError(
        'conflict',
        'Another window or colleague changed this entry. Both texts are kept: compare them.',
        {
          details: { current: await toDraftDto(tx, draft) },
        },
      );
    }
    const received = now();
    const stamps = nextStamps(draft.stamps, doc.content ?? [], {
      written: save.written,
      clockOffsetMs: save.clockOffsetMs,
      by: person.id,
      received,
    });
    const [stored] = await tx
      .update(entryDraft)
      .set({
        revision: draft.revision + 1,
        title: save.title,
        doc,
        stamps,
        savedAt: received,
        savedBy: person.id,
        lastSaveId: save.saveId,
      })
      .where(eq(entryDraft.entryId, entryId))
      .returning();
    await tx
      .update(entry)
      .set({
        title: save.title.trim() || row.title,
        changedAt: received,
        words: `${save.title} ${documentText(doc)}`.slice(0, 200_000),
      })
      .where(eq(entry.id, entryId));
    if (row.authorId !== person.id) {
      await tx
        .update(entryContributor)
        .set({ wroteAt: received })
        .where(
          and(
            eq(entryContributor.entryId, entryId),
            eq(entryContributor.userId, person.id),
            isNull(entryContributor.wroteAt),
          ),
        );
    }
    return savedFrom(stored);
  });
}

const savedFrom = (draft: DraftRow): Saved => ({
  revision: draft.revision,
  savedAt: draft.savedAt.toISOString(),
  stamps: draft.stamps,
});
