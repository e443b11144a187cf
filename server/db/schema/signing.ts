import { index, pgTable, primaryKey, text, timestamp, unique, uuid } from 'drizzle-orm/pg-core';
import { bytea } from './bytea';
import { entry, trace } from './entries';
import { user } from './people';

const time = (name: string) => timestamp(name, { withTimezone: true, mode: 'date' });
const person = (name: string) => text(name).references(() => user.id);
const ofEntry = () =>
  uuid('entry_id')
    .notNull()
    .references(() => entry.id);

export const witnessRequest = pgTable(
  'witness_request',
  {
    id: uuid('id').primaryKey(),
    entryId: ofEntry(),
    witnessId: person('witness_id').notNull(),
    requestedBy: person('requested_by').notNull(),
    requestedAt: time('requested_at').notNull().defaultNow(),
    closedAt: time('closed_at'),
  },
  (t) => [index('witness_request_witness').on(t.witnessId), unique('witness_request_once').on(t.entryId, t.witnessId)],
);

export const question = pgTable(
  'question',
  {
    id: uuid('id').primaryKey(),
    entryId: ofEntry(),
    versionDigest: text('version_digest').notNull(),
    blockId: text('block_id'),
    quote: text('quote').notNull().default(''),
    text: text('text').notNull(),
    askedBy: person('asked_by').notNull(),
    askedAt: time('asked_at').notNull(),
    state: text('state').$type<'open' | 'answered'>().notNull().default('open'),
    requestKey: uuid('request_key').unique(),
  },
  (t) => [index('question_entry').on(t.entryId)],
);

export const answer = pgTable(
  'answer',
  {
    id: uuid('id').primaryKey(),
    questionId: uuid('question_id')
      .notNull()
      .references(() => question.id),
    text: text('text').notNull(),
    answeredBy: person('answered_by').notNull(),
    answeredAt: time('answered_at').notNull(),
  },
  (t) => [index('answer_question').on(t.questionId)],
);

/** That a reader was served a trace of a version: a witness must have been served all of them. */
export const traceServed = pgTable(
  'trace_served',
  {
    versionDigest: text('version_digest').notNull(),
    traceId: uuid('trace_id')
      .notNull()
      .references(() => trace.id),
    userId: person('user_id').notNull(),
    servedAt: time('served_at').notNull(),
  },
  (t) => [primaryKey({ columns: [t.versionDigest, t.traceId, t.userId] })],
);

export const challenge = pgTable('challenge', {
  id: uuid('id').primaryKey(),
  userId: person('user_id').notNull(),
  purpose: text('purpose').$type<'sign' | 'countersign'>().notNull(),
  entryId: ofEntry(),
  versionDigest: text('version_digest').notNull(),
  /** Digest of everything that was shown to be bound. */
  shownDigest: text('shown_digest').notNull(),
  issuedAt: time('issued_at').notNull(),
  expiresAt: time('expires_at').notNull(),
  usedAt: time('used_at'),
});

export const signature = pgTable(
  'signature',
  {
    id: uuid('id').primaryKey(),
    entryId: ofEntry(),
    kind: text('kind').$type<'author' | 'witness'>().notNull(),
    versionDigest: text('version_digest').notNull(),
    signerId: person('signer_id').notNull(),
    printedName: text('printed_name').notNull(),
    meaning: text('meaning').notNull(),
    signedAt: time('signed_at').notNull(),
    zone: text('zone').notNull(),
    lateReason: text('late_reason'),
    /** Canonical statement (RFC 8785) and its SHA-256. */
    statement: bytea('statement').notNull(),
    statementDigest: text('statement_digest').notNull(),
    attestation: text('attestation').$type<'server'>().notNull(),
  },
  (t) => [unique('signature_once').on(t.versionDigest, t.kind), index('signature_entry').on(t.entryId)],
);
