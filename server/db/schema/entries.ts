import {
  bigint,
  date,
  index,
  integer,
  jsonb,
  pgTable,
  primaryKey,
  text,
  timestamp,
  unique,
  uuid,
} from 'drizzle-orm/pg-core';
import type { DocumentJson } from '@/lib/document/json';
import type { BlockStamps, EntryState } from '@/lib/schemas/entry';
import { bytea } from './bytea';
import { cooldown, device } from './laboratory';
import { notebook } from './notebooks';
import { user } from './people';

const time = (name: string) => timestamp(name, { withTimezone: true, mode: 'date' });
const person = (name: string) => text(name).references(() => user.id);

export const entry = pgTable(
  'entry',
  {
    id: uuid('id').primaryKey(),
    notebookId: uuid('notebook_id')
      .notNull()
      .references(() => notebook.id),
    leaf: integer('leaf').notNull(),
    title: text('title').notNull(),
    workDate: date('work_date', { mode: 'string' }).notNull(),
    state: text('state').$type<EntryState>().notNull().default('draft'),
    authorId: person('author_id').notNull(),
    cooldownId: uuid('cooldown_id').references(() => cooldown.id),
    /** Sequence number of the newest version; 0 before the first. */
    headSeq: integer('head_seq').notNull().default(0),
    createdAt: time('created_at').notNull().defaultNow(),
    changedAt: time('changed_at').notNull().defaultNow(),
    struckReason: text('struck_reason'),
    struckAt: time('struck_at'),
    /** Made by the browser, so that a repeated request makes one entry. */
    requestKey: uuid('request_key').unique(),
    /** Words of the newest text, for finding. */
    words: text('words').notNull().default(''),
  },
  (t) => [
    unique('entry_leaf').on(t.notebookId, t.leaf),
    index('entry_state').on(t.notebookId, t.state),
    index('entry_author').on(t.authorId, t.state),
    index('entry_cooldown').on(t.cooldownId),
  ],
);

export const entryDevice = pgTable(
  'entry_device',
  {
    entryId: uuid('entry_id')
      .notNull()
      .references(() => entry.id),
    deviceId: uuid('device_id')
      .notNull()
      .references(() => device.id),
  },
  (t) => [primaryKey({ columns: [t.entryId, t.deviceId] }), index('entry_device_device').on(t.deviceId)],
);

export const entryContributor = pgTable(
  'entry_contributor',
  {
    entryId: uuid('entry_id')
      .notNull()
      .references(() => entry.id),
    userId: person('user_id').notNull(),
    invitedBy: person('invited_by').notNull(),
    since: time('since').notNull().defaultNow(),
    /** Set with the first text of theirs; from then on they may never countersign this entry. */
    wroteAt: time('wrote_at'),
    endedAt: time('ended_at'),
  },
  (t) => [primaryKey({ columns: [t.entryId, t.userId] })],
);

export const entryDraft = pgTable('entry_draft', {
  entryId: uuid('entry_id')
    .primaryKey()
    .references(() => entry.id),
  revision: integer('revision').notNull(),
  title: text('title').notNull(),
  doc: jsonb('doc').$type<DocumentJson>().notNull(),
  stamps: jsonb('stamps').$type<BlockStamps>().notNull(),
  savedAt: time('saved_at').notNull(),
  savedBy: person('saved_by').notNull(),
  lastSaveId: uuid('last_save_id'),
  /** Revision from which the newest version was cut. */
  cutRevision: integer('cut_revision').notNull().default(0),
});

export const entryVersion = pgTable(
  'entry_version',
  {
    id: uuid('id').primaryKey(),
    entryId: uuid('entry_id')
      .notNull()
      .references(() => entry.id),
    seq: integer('seq').notNull(),
    /** The exact bytes (RFC 8785) that were hashed. */
    canonical: bytea('canonical').notNull(),
    digest: text('digest').notNull(),
    previous: text('previous'),
    title: text('title').notNull(),
    reason: text('reason'),
    createdAt: time('created_at').notNull(),
    createdBy: person('created_by').notNull(),
  },
  (t) => [unique('entry_version_seq').on(t.entryId, t.seq), index('entry_version_digest').on(t.digest)],
);

export const trace = pgTable(
  'trace',
  {
    id: uuid('id').primaryKey(),
    notebookId: uuid('notebook_id')
      .notNull()
      .references(() => notebook.id),
    entryId: uuid('entry_id').references(() => entry.id),
    kind: text('kind').$type<'trace' | 'picture'>().notNull(),
    fileName: text('file_name').notNull(),
    mediaType: text('media_type').notNull(),
    bytes: bigint('bytes', { mode: 'number' }).notNull(),
    sha256: text('sha256').notNull(),
    state: text('state').$type<'received' | 'parsed' | 'unreadable'>().notNull(),
    problem: text('problem'),
    rows: bigint('rows', { mode: 'number' }).notNull().default(0),
    comments: jsonb('comments').$type<string[]>().notNull().default([]),
    uploadId: text('upload_id').notNull(),
    uploadedBy: person('uploaded_by').notNull(),
    receivedAt: time('received_at').notNull(),
  },
  (t) => [
    unique('trace_upload').on(t.uploadedBy, t.entryId, t.uploadId),
    index('trace_entry').on(t.entryId),
    index('trace_sha256').on(t.sha256),
    index('trace_state').on(t.state),
  ],
);

export const traceColumn = pgTable(
  'trace_column',
  {
    traceId: uuid('trace_id')
      .notNull()
      .references(() => trace.id),
    position: integer('position').notNull(),
    name: text('name').notNull(),
    symbol: text('symbol').notNull(),
    unit: text('unit'),
    missing: bigint('missing', { mode: 'number' }).notNull(),
    /** Decimal text of the extremes, or null for a column without numbers. */
    minimum: text('minimum'),
    maximum: text('maximum'),
  },
  (t) => [primaryKey({ columns: [t.traceId, t.position] })],
);
