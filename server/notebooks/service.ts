import 'server-only';
import { randomUUID } from 'node:crypto';
import { and, asc, desc, eq, sql } from 'drizzle-orm';
import { z } from 'zod';
import { AppError } from '@/lib/errors/app-error';
import { emailSchema, notebookRoles, type NotebookRole } from '@/lib/schemas/person';
import type { PersonDto } from '@/lib/schemas/entry';
import type { Person } from '@/server/access/person';
import type { ScopeOf } from '@/server/access/scope';
import { getDb, type Tx } from '@/server/db/client';
import { logRecord } from '@/server/db/schema/housekeeping';
import { notebook, notebookMember } from '@/server/db/schema/notebooks';
import { user } from '@/server/db/schema/people';
import { appendLog } from '@/server/log/service';
import { queueMail } from '@/server/mail/service';
import { addressesOf, peopleById, toPersonDto } from '@/server/people/service';
import { env } from '@/server/env/env';

export const notebookCodeSchema = z
  .string()
  .trim()
  .toUpperCase()
  .regex(/^[A-Z][A-Z0-9]{0,7}-[0-9]{1,4}$/, 'A code looks like NB-03: letters, a hyphen, a number.');

export const newNotebookSchema = z
  .object({
    code: notebookCodeSchema,
    title: z.string().trim().min(1, 'A notebook needs a title.').max(200),
    description: z.string().trim().max(2000),
  })
  .strict();

export type NotebookLine = {
  code: string;
  title: string;
  description: string;
  role: NotebookRole;
  leaves: number;
  drafts: number;
  waiting: number;
  lastWork: string | null;
};

/** Notebooks of which the person is a member. */
export async function listNotebooks(personId: string): Promise<NotebookLine[]> {
  const db = await getDb();
  const rows = await db
    .select({
      code: notebook.code,
      title: notebook.title,
      description: notebook.description,
      role: notebookMember.role,
      leaves: sql<number>`${notebook.nextLeaf} - 1`,
      drafts: sql<number>`(select count(*) from entry where entry.notebook_id = ${notebook.id} and entry.state = 'draft')`,
      waiting: sql<number>`(select count(*) from entry where entry.notebook_id = ${notebook.id} and entry.state = 'signed')`,
      lastWork: sql<string | null>`(select max(work_date)::text from entry where entry.notebook_id = ${notebook.id})`,
    })
    .from(notebook)
    .innerJoin(notebookMember, and(eq(notebookMember.notebookId, notebook.id), eq(notebookMember.userId, personId)))
    .orderBy(asc(notebook.code));
  return rows.map((row) => ({
    ...row,
    leaves: Number(row.leaves),
    drafts: Number(row.drafts),
    waiting: Number(row.waiting),
  }));
}

/** Founds a notebook; whoever does it becomes its lead. */
export async function foundNotebook(
  person: Person,
  input: z.infer<typeof newNotebookSchema>,
): Promise<{ code: string }> {
  const db = await getDb();
  await db.transaction(async (tx) => {
    const [known] = await tx.select({ id: notebook.id }).from(notebook).where(eq(notebook.code, input.code));
    if (known)
      throw new AppError('conflict', `The code ${input.code} is taken. Choose another number.`, { field: 'code' });
    await insertNotebook(tx, { id: randomUUID(), ...input, leadId: person.id });
  });
  return { code: input.code };
}

export async function insertNotebook(
  tx: Tx,
  input: { id: string; code: string; title: string; description: string; leadId: string },
): Promise<void> {
  await tx.insert(notebook).values({
    id: input.id,
    code: input.code,
    title: input.title,
    description: input.description,
    createdBy: input.leadId,
  });
  await tx.insert(notebookMember).values({ notebookId: input.id, userId: input.leadId, role: 'lead' });
  await appendLog(tx, {
    kind: 'notebook founded',
    actorId: input.leadId,
    notebookId: input.id,
    detail: { code: input.code },
  });
}

export const notebookFactsSchema = z
  .object({
    title: z.string().trim().min(1, 'A notebook needs a title.').max(200),
    description: z.string().trim().max(2000),
    lateAfterDays: z.number().int().min(0).max(365),
  })
  .strict();

export async function changeNotebook(
  scope: ScopeOf<'notebook.change'>,
  facts: z.infer<typeof notebookFactsSchema>,
): Promise<void> {
  const db = await getDb();
  await db.transaction(async (tx) => {
    await tx.update(notebook).set(facts).where(eq(notebook.id, scope.notebook.id));
    await appendLog(tx, {
      kind: 'notebook changed',
      actorId: scope.person.id,
      notebookId: scope.notebook.id,
      detail: facts,
    });
  });
}

export type MemberLine = { person: PersonDto; role: NotebookRole; since: string };

export async function listMembers(notebookId: string): Promise<MemberLine[]> {
  const rows = await (
    await getDb()
  )
    .select({ id: user.id, name: user.name, role: notebookMember.role, since: notebookMember.since })
    .from(notebookMember)
    .innerJoin(user, eq(user.id, notebookMember.userId))
    .where(eq(notebookMember.notebookId, notebookId))
    .orderBy(asc(user.name));
  return rows.map((row) => ({ person: toPersonDto(row), role: row.role, since: row.since.toISOString() }));
}

export const addMemberSchema = z.object({ email: emailSchema, role: z.enum(notebookRoles) }).strict();
export const changeMemberSchema = z.object({ role: z.enum(notebookRoles) }).strict();

/** Adds somebody who has an account, by e-mail address. */
export async function addMember(
  scope: ScopeOf<'notebook.change'>,
  input: z.infer<typeof addMemberSchema>,
): Promise<void> {
  const db = await getDb();
  await db.transaction(async (tx) => {
    const [person] = await tx.select({ id: user.id, email: user.email }).from(user).where(eq(user.email, input.email));
    if (!person)
      throw new AppError(
        'invalid',
        'Nobody with this address has an account yet. An administrator sends invitations.',
        { field: 'email' },
      );
    const added = await tx
      .insert(notebookMember)
      .values({ notebookId: scope.notebook.id, userId: person.id, role: input.role })
      .onConflictDoNothing()
      .returning({ userId: notebookMember.userId });
    if (added.length === 0)
      throw new AppError('conflict', 'This person is a member already; change the role in the list.', {
        field: 'email',
      });
    await appendLog(tx, {
      kind: 'member added',
      actorId: scope.person.id,
      notebookId: scope.notebook.id,
      detail: { person: person.id, role: input.role },
    });
    await queueMail(tx, {
      to: person.email,
      subject: `You are now ${input.role} in ${scope.notebook.code}`,
      lines: [
        `${scope.person.name} has added you to the notebook ${scope.notebook.code}, ${scope.notebook.title}.`,
        `${env().baseUrl}/notebooks/${scope.notebook.code}`,
      ],
    });
  });
}

/** Changes a role or, with null, ends a membership. A notebook keeps at least one lead. */
export async function changeMember(
  scope: ScopeOf<'notebook.change'>,
  userId: string,
  role: NotebookRole | null,
): Promise<void> {
  const db = await getDb();
  await db.transaction(async (tx) => {
    const members = await tx
      .select()
      .from(notebookMember)
      .where(eq(notebookMember.notebookId, scope.notebook.id))
      .for('update');
    const member = members.find((m) => m.userId === userId);
    if (!member) throw new AppError('not_found', 'This person is not a member.');
    const leadsLeft =
      members.filter((m) => m.role === 'lead' && m.userId !== userId).length + (role === 'lead' ? 1 : 0);
    if (leadsLeft === 0) throw new AppError('invalid', 'A notebook needs a lead: appoint another one first.');
    const which = and(eq(notebookMember.notebookId, scope.notebook.id), eq(notebookMember.userId, userId));
    if (role) await tx.update(notebookMember).set({ role }).where(which);
    else await tx.delete(notebookMember).where(which);
    await appendLog(tx, {
      kind: role ? 'member changed' : 'member removed',
      actorId: scope.person.id,
      notebookId: scope.notebook.id,
      detail: { person: userId, from: member.role, ...(role ? { to: role } : {}) },
    });
  });
}

/**
 * Where a notebook has lost its leads (closed accounts): an administrator appoints one of its members, never themself.
 * It is logged, and every member gets a mail.
 */
export async function rescueAppointment(by: Person, code: string, userId: string): Promise<void> {
  const db = await getDb();
  await db.transaction(async (tx) => {
    const [book] = await tx.select().from(notebook).where(eq(notebook.code, code));
    if (!book) throw new AppError('not_found', 'There is no such notebook.');
    if (userId === by.id) throw new AppError('not_allowed', 'An administrator cannot become a member alone.');
    const members = await tx
      .select({ userId: notebookMember.userId, role: notebookMember.role, disabledAt: user.disabledAt })
      .from(notebookMember)
      .innerJoin(user, eq(user.id, notebookMember.userId))
      .where(eq(notebookMember.notebookId, book.id));
    if (members.some((m) => m.role === 'lead' && m.disabledAt === null)) {
      throw new AppError('not_allowed', 'This notebook has a lead: only the lead changes its members.');
    }
    if (!members.some((m) => m.userId === userId)) throw new AppError('invalid', 'Only a member can be appointed.');
    await tx
      .update(notebookMember)
      .set({ role: 'lead' })
      .where(and(eq(notebookMember.notebookId, book.id), eq(notebookMember.userId, userId)));
    await appendLog(tx, {
      kind: 'rescue appointment',
      actorId: by.id,
      notebookId: book.id,
      detail: { person: userId },
    });
    const addresses = await addressesOf(
      tx,
      members.map((m) => m.userId),
    );
    const named = (await peopleById(tx, [userId])).get(userId)!;
    for (const to of addresses.values()) {
      await queueMail(tx, {
        to,
        subject: `New lead of ${code}`,
        lines: [`${by.name}, administrator, has appointed ${named.name} lead of ${code}, which had none.`],
      });
    }
  });
}

export type AuditLine = {
  seq: number;
  at: string;
  kind: string;
  actor: string;
  entryId: string | null;
  detail: Record<string, unknown>;
};

/** The log of one notebook, newest first. */
export async function readAuditTrail(notebookId: string): Promise<AuditLine[]> {
  const rows = await (
    await getDb()
  )
    .select({ record: logRecord, actor: user.name })
    .from(logRecord)
    .leftJoin(user, eq(user.id, logRecord.actorId))
    .where(eq(logRecord.notebookId, notebookId))
    .orderBy(desc(logRecord.seq))
    .limit(2000);
  return rows.map(({ record, actor }) => ({
    seq: record.seq,
    at: record.at.toISOString(),
    kind: record.kind,
    actor: actor ?? 'the server',
    entryId: record.entryId,
    detail: record.detail,
  }));
}
