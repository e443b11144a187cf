import 'server-only';
import { and, eq } from 'drizzle-orm';
import { AppError } from '@/lib/errors/app-error';
import type { NotebookRole } from '@/lib/schemas/person';
import { getDb } from '@/server/db/client';
import { entry, entryContributor, trace } from '@/server/db/schema/entries';
import { cooldown, device } from '@/server/db/schema/laboratory';
import { notebook, notebookMember } from '@/server/db/schema/notebooks';
import { question } from '@/server/db/schema/signing';
import type { Person } from './person';
import { actions, decide, type Action, type Standing, type TargetOf } from './rights';

export type NotebookScope = { id: string; code: string; title: string; role: NotebookRole; lateAfterDays: number };
export type EntryScope = typeof entry.$inferSelect & { isAuthor: boolean; mayContribute: boolean; tookPart: boolean };

type Base = { person: Person };
type InNotebook = Base & { notebook: NotebookScope };
type OfEntry = InNotebook & { entry: EntryScope; standing: Standing };

/** What a call may work on, proven to be the caller's to use. */
export type ScopeOf<A extends Action> =
  TargetOf<A> extends 'public'
    ? { person: Person | null }
    : TargetOf<A> extends 'notebook'
      ? InNotebook
      : TargetOf<A> extends 'entry'
        ? OfEntry
        : TargetOf<A> extends 'question'
          ? OfEntry & { questionId: string }
          : TargetOf<A> extends 'trace'
            ? InNotebook & { traceId: string; entry: EntryScope | null }
            : TargetOf<A> extends 'device'
              ? InNotebook & { deviceId: string }
              : TargetOf<A> extends 'cooldown'
                ? InNotebook & { cooldownId: string }
                : Base;

const uuid = /^[0-9a-f]{8}-[0-9a-f]{4}-[0-9a-f]{4}-[0-9a-f]{4}-[0-9a-f]{12}$/;
const nothingHere = () => new AppError('not_found', 'There is nothing here, or it is not for you to see.');

/**
 * Finds the resource that `id` names, the person's standing towards it, and decides.
 * @throws AppError signed_out, not_found, not_allowed, frozen.
 */
export async function authorise<A extends Action>(
  action: A,
  person: Person | null,
  id: string | null,
): Promise<ScopeOf<A>> {
  return (await resolve(action, person, id)) as ScopeOf<A>;
}

async function resolve(action: Action, person: Person | null, id: string | null): Promise<object> {
  const rule = actions[action];
  if (rule.target === 'public') return { person };
  if (!person)
    throw new AppError('signed_out', 'You are signed out. Sign in again; what you typed is kept in this browser.');
  if (person.by === 'token' && !('token' in rule && rule.token)) {
    throw new AppError('not_allowed', 'A token cannot do this: it needs you, signed in.');
  }
  switch (rule.target) {
    case 'person':
      return { person };
    case 'installation':
      if (person.role !== 'administrator') throw nothingHere();
      return { person };
    case 'notebook': {
      if (!id || id.length > 40) throw nothingHere();
      const found = await notebookFor(person.id, eq(notebook.code, id));
      decide(action, { role: found?.role ?? null, entry: null });
      return { person, notebook: found };
    }
    case 'entry':
      return ofEntry(action, person, needUuid(id));
    case 'question': {
      const [row] = await (
        await getDb()
      )
        .select({ entryId: question.entryId })
        .from(question)
        .where(eq(question.id, needUuid(id)));
      if (!row) throw nothingHere();
      return { ...(await ofEntry(action, person, row.entryId)), questionId: id };
    }
    case 'trace': {
      const [row] = await (
        await getDb()
      )
        .select({ entryId: trace.entryId, notebookId: trace.notebookId })
        .from(trace)
        .where(eq(trace.id, needUuid(id)));
      if (!row) throw nothingHere();
      if (row.entryId) return { ...(await ofEntry(action, person, row.entryId)), traceId: id };
      const found = await notebookFor(person.id, eq(notebook.id, row.notebookId));
      decide(action, { role: found?.role ?? null, entry: null });
      return { person, notebook: found, traceId: id, entry: null };
    }
    case 'device':
    case 'cooldown': {
      const table = rule.target === 'device' ? device : cooldown;
      const [row] = await (
        await getDb()
      )
        .select({ notebookId: table.notebookId })
        .from(table)
        .where(eq(table.id, needUuid(id)));
      if (!row) throw nothingHere();
      const found = await notebookFor(person.id, eq(notebook.id, row.notebookId));
      decide(action, { role: found?.role ?? null, entry: null });
      return { person, notebook: found, [rule.target === 'device' ? 'deviceId' : 'cooldownId']: id };
    }
  }
}

function needUuid(id: string | null): string {
  if (!id || !uuid.test(id)) throw nothingHere();
  return id;
}

async function notebookFor(personId: string, which: ReturnType<typeof eq>): Promise<NotebookScope | null> {
  const [row] = await (
    await getDb()
  )
    .select({
      id: notebook.id,
      code: notebook.code,
      title: notebook.title,
      lateAfterDays: notebook.lateAfterDays,
      role: notebookMember.role,
    })
    .from(notebook)
    .innerJoin(notebookMember, and(eq(notebookMember.notebookId, notebook.id), eq(notebookMember.userId, personId)))
    .where(which);
  return row ?? null;
}

async function ofEntry(action: Action, person: Person, entryId: string) {
  const db = await getDb();
  const [row] = await db.select().from(entry).where(eq(entry.id, entryId));
  if (!row) throw nothingHere();
  const found = await notebookFor(person.id, eq(notebook.id, row.notebookId));
  const [contributor] = await db
    .select({ endedAt: entryContributor.endedAt, wroteAt: entryContributor.wroteAt })
    .from(entryContributor)
    .where(and(eq(entryContributor.entryId, entryId), eq(entryContributor.userId, person.id)));
  const scope = {
    ...row,
    isAuthor: row.authorId === person.id,
    mayContribute: contributor !== undefined && contributor.endedAt === null,
    tookPart: contributor !== undefined,
  };
  const standing: Standing = { role: found?.role ?? null, entry: scope };
  decide(action, standing);
  return { person, notebook: found, entry: scope, standing };
}
