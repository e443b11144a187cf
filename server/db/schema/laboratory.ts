import { doublePrecision, index, integer, pgTable, primaryKey, text, timestamp, uuid } from 'drizzle-orm/pg-core';
import { notebook } from './notebooks';
import { user } from './people';

const time = (name: string) => timestamp(name, { withTimezone: true, mode: 'date' });

/** Devices and cooldowns belong to a notebook: its members see them, others do not. */
export const device = pgTable(
  'device',
  {
    id: uuid('id').primaryKey(),
    notebookId: uuid('notebook_id')
      .notNull()
      .references(() => notebook.id),
    name: text('name').notNull(),
    lot: text('lot').notNull().default(''),
    wafer: text('wafer').notNull().default(''),
    die: text('die').notNull().default(''),
    material: text('material').notNull().default(''),
    dimensions: text('dimensions').notNull().default(''),
    remarks: text('remarks').notNull().default(''),
    revision: integer('revision').notNull().default(1),
    createdAt: time('created_at').notNull().defaultNow(),
    createdBy: text('created_by')
      .notNull()
      .references(() => user.id),
  },
  (t) => [index('device_notebook').on(t.notebookId)],
);

export const gate = pgTable(
  'gate',
  {
    id: uuid('id').primaryKey(),
    deviceId: uuid('device_id')
      .notNull()
      .references(() => device.id),
    position: integer('position').notNull(),
    name: text('name').notNull(),
    purpose: text('purpose').notNull().default(''),
    widthNm: doublePrecision('width_nm'),
    lengthNm: doublePrecision('length_nm'),
  },
  (t) => [index('gate_device').on(t.deviceId)],
);

export const cooldown = pgTable(
  'cooldown',
  {
    id: uuid('id').primaryKey(),
    notebookId: uuid('notebook_id')
      .notNull()
      .references(() => notebook.id),
    name: text('name').notNull(),
    cryostat: text('cryostat').notNull(),
    startedOn: text('started_on').notNull(),
    endedOn: text('ended_on'),
    baseTemperature: text('base_temperature').notNull().default(''),
    remarks: text('remarks').notNull().default(''),
    revision: integer('revision').notNull().default(1),
    createdAt: time('created_at').notNull().defaultNow(),
    createdBy: text('created_by')
      .notNull()
      .references(() => user.id),
  },
  (t) => [index('cooldown_notebook').on(t.notebookId)],
);

export const cooldownDevice = pgTable(
  'cooldown_device',
  {
    cooldownId: uuid('cooldown_id')
      .notNull()
      .references(() => cooldown.id),
    deviceId: uuid('device_id')
      .notNull()
      .references(() => device.id),
  },
  (t) => [primaryKey({ columns: [t.cooldownId, t.deviceId] }), index('cooldown_device_device').on(t.deviceId)],
);

export const cooldownLine = pgTable(
  'cooldown_line',
  {
    id: uuid('id').primaryKey(),
    cooldownId: uuid('cooldown_id')
      .notNull()
      .references(() => cooldown.id),
    position: integer('position').notNull(),
    name: text('name').notNull(),
    contact: text('contact').notNull().default(''),
    attenuation: text('attenuation').notNull().default(''),
    filter: text('filter').notNull().default(''),
    biasTee: text('bias_tee').notNull().default(''),
    instrument: text('instrument').notNull().default(''),
  },
  (t) => [index('cooldown_line_cooldown').on(t.cooldownId)],
);
