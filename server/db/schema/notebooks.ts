import { index, integer, jsonb, pgTable, primaryKey, text, timestamp, uuid } from 'drizzle-orm/pg-core';
import type { DocumentJson } from '@/lib/document/json';
import { user } from './people';

const time = (name: string) => timestamp(name, { withTimezone: true, mode: 'date' });

export const notebook = pgTable('notebook', {
  id: uuid('id').primaryKey(),
  code: text('code').notNull().unique(),
  title: text('title').notNull(),
  description: text('description').notNull().default(''),
  /** The leaf number that the next entry takes; only ever grows. */
  nextLeaf: integer('next_leaf').notNull().default(1),
  /** Days after the work until a signature counts as late. */
  lateAfterDays: integer('late_after_days').notNull().default(3),
  createdAt: time('created_at').notNull().defaultNow(),
  createdBy: text('created_by')
    .notNull()
    .references(() => user.id),
});

export const notebookMember = pgTable(
  'notebook_member',
  {
    notebookId: uuid('notebook_id')
      .notNull()
      .references(() => notebook.id),
    userId: text('user_id')
      .notNull()
      .references(() => user.id),
    role: text('role').$type<'lead' | 'author' | 'witness' | 'reader'>().notNull(),
    since: time('since').notNull().defaultNow(),
  },
  (t) => [primaryKey({ columns: [t.notebookId, t.userId] }), index('notebook_member_user').on(t.userId)],
);

/** The structure of an entry, saved for reuse. */
export const layout = pgTable('layout', {
  id: uuid('id').primaryKey(),
  notebookId: uuid('notebook_id')
    .notNull()
    .references(() => notebook.id),
  name: text('name').notNull(),
  doc: jsonb('doc').$type<DocumentJson>().notNull(),
  createdBy: text('created_by')
    .notNull()
    .references(() => user.id),
  createdAt: time('created_at').notNull().defaultNow(),
});
