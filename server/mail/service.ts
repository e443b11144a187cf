import 'server-only';
import { randomUUID } from 'node:crypto';
import { and, asc, desc, isNull, lte, sql } from 'drizzle-orm';
import { emailSchema } from '@/lib/schemas/person';
import type { Db, DbOrTx } from '@/server/db/client';
import { mailMessage } from '@/server/db/schema/housekeeping';
import { env } from '@/server/env/env';
import { report } from '@/server/diagnostics/report';
import { deliver } from './transport';

export type Mail = { to: string; subject: string; lines: string[] };

/** Queues a mail as a row; with `tx` it is part of the change that causes it. Never waits for a mail server. */
export async function queueMail(db: DbOrTx, mail: Mail): Promise<void> {
  // An address with a line break would add recipients of its own.
  const recipient = emailSchema.parse(mail.to);
  await db.insert(mailMessage).values({
    id: randomUUID(),
    recipient,
    subject: mail.subject.replace(/[\r\n]+/g, ' ').slice(0, 200),
    body: mail.lines.join('\n\n'),
  });
}

/** Sends what is due; a failure waits 1, 2, 4 … minutes, up to a day. Returns how many were sent. */
export async function sendDueMail(db: Db): Promise<number> {
  const due = await db.transaction(async (tx) => {
    const rows = await tx
      .select()
      .from(mailMessage)
      .where(and(isNull(mailMessage.sentAt), lte(mailMessage.nextAttemptAt, new Date())))
      .orderBy(asc(mailMessage.queuedAt))
      .limit(20)
      .for('update', { skipLocked: true });
    for (const row of rows) {
      const waitMs = Math.min(60_000 * 2 ** row.attempts, 86_400_000);
      await tx
        .update(mailMessage)
        .set({ attempts: row.attempts + 1, nextAttemptAt: new Date(Date.now() + waitMs) })
        .where(sql`${mailMessage.id} = ${row.id}`);
    }
    return rows;
  });
  let sent = 0;
  for (const row of due) {
    try {
      await deliver({ id: row.id, to: row.recipient, subject: row.subject, text: row.body });
      await db
        .update(mailMessage)
        .set({ sentAt: new Date(), problem: null })
        .where(sql`${mailMessage.id} = ${row.id}`);
      sent += 1;
    } catch (error) {
      report('mail not sent', { mail: row.id, attempt: row.attempts + 1 }, error);
      await db
        .update(mailMessage)
        .set({ problem: error instanceof Error ? error.message.slice(0, 300) : 'unknown' })
        .where(sql`${mailMessage.id} = ${row.id}`);
    }
  }
  return sent;
}

export type OutboxLine = {
  id: string;
  to: string;
  subject: string;
  queuedAt: string;
  sentAt: string | null;
  attempts: number;
  problem: string | null;
};

/** The outbox as an administrator sees it: that a mail was sent, never its links. */
export async function listOutbox(db: Db): Promise<OutboxLine[]> {
  const rows = await db.select().from(mailMessage).orderBy(desc(mailMessage.queuedAt)).limit(200);
  return rows.map((row) => ({
    id: row.id,
    to: row.recipient,
    subject: row.subject,
    queuedAt: row.queuedAt.toISOString(),
    sentAt: row.sentAt?.toISOString() ?? null,
    attempts: row.attempts,
    problem: row.problem,
  }));
}

export type LocalMail = { id: string; to: string; subject: string; text: string; queuedAt: string };

/** The local mailbox with bodies; empty except where the demo data is loaded and no real mail server is set. */
export async function readLocalMailbox(db: Db): Promise<LocalMail[]> {
  if (!env().demo || env().smtpUrl) return [];
  const rows = await db.select().from(mailMessage).orderBy(desc(mailMessage.queuedAt)).limit(50);
  return rows.map((row) => ({
    id: row.id,
    to: row.recipient,
    subject: row.subject,
    text: row.body,
    queuedAt: row.queuedAt.toISOString(),
  }));
}
