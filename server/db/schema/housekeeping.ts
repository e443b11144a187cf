import { bigint, index, integer, jsonb, pgTable, text, timestamp, uuid } from 'drizzle-orm/pg-core';
import { user } from './people';

const time = (name: string) => timestamp(name, { withTimezone: true, mode: 'date' });

/** Everything that matters to the record, in order; written in the transaction of the change it tells of. */
export const logRecord = pgTable(
  'log_record',
  {
    /** Assigned under a lock by the log itself, so that it has no gaps. */
    seq: bigint('seq', { mode: 'number' }).primaryKey(),
    at: time('at').notNull(),
    kind: text('kind').notNull(),
    actorId: text('actor_id').references(() => user.id),
    notebookId: uuid('notebook_id'),
    entryId: uuid('entry_id'),
    detail: jsonb('detail').$type<Record<string, unknown>>().notNull(),
  },
  (t) => [index('log_record_notebook').on(t.notebookId), index('log_record_entry').on(t.entryId)],
);

/** Failed sign-ins and the like: kept apart, so that strangers cannot grow the record's log. */
export const securityEvent = pgTable('security_event', {
  id: uuid('id').primaryKey(),
  at: time('at').notNull().defaultNow(),
  kind: text('kind').notNull(),
  subject: text('subject').notNull(),
  address: text('address').notNull().default(''),
});

export const mailMessage = pgTable(
  'mail_message',
  {
    id: uuid('id').primaryKey(),
    recipient: text('recipient').notNull(),
    subject: text('subject').notNull(),
    body: text('body').notNull(),
    queuedAt: time('queued_at').notNull().defaultNow(),
    sentAt: time('sent_at'),
    attempts: integer('attempts').notNull().default(0),
    nextAttemptAt: time('next_attempt_at').notNull().defaultNow(),
    problem: text('problem'),
  },
  (t) => [index('mail_message_unsent').on(t.sentAt, t.nextAttemptAt)],
);

export const job = pgTable(
  'job',
  {
    id: uuid('id').primaryKey(),
    kind: text('kind').notNull(),
    payload: jsonb('payload').$type<Record<string, unknown>>().notNull(),
    /** Equal keys are one piece of work. */
    key: text('key').notNull().unique(),
    state: text('state').$type<'waiting' | 'running' | 'done' | 'failed'>().notNull().default('waiting'),
    attempts: integer('attempts').notNull().default(0),
    runAfter: time('run_after').notNull().defaultNow(),
    /** A running job whose lease has passed was killed and is taken again. */
    leaseUntil: time('lease_until'),
    problem: text('problem'),
  },
  (t) => [index('job_waiting').on(t.state, t.runAfter)],
);

export const rateCount = pgTable('rate_count', {
  key: text('key').primaryKey(),
  windowStart: time('window_start').notNull(),
  count: integer('count').notNull(),
});

export const setting = pgTable('setting', {
  key: text('key').primaryKey(),
  value: jsonb('value').$type<unknown>().notNull(),
});

/** Sequence number of the last journal record whose transaction this database holds (one row). */
export const journalPosition = pgTable('journal_position', {
  id: integer('id').primaryKey(),
  seq: bigint('seq', { mode: 'number' }).notNull(),
});
