// The small edition: the editor needs these in the browser. On the server both editions speak with one voice.
import * as z from 'zod/mini';
import { symbolPattern } from './symbol';

/**
 * Attributes of the document's own nodes, as stored in the editor's JSON and bound in every version.
 * The editor, the server's check and the evaluation read these and nothing else.
 */

/** Short random id of a block, unique within its entry; block stamps and questions point at it. */
export const blockIdSchema = z.string().check(z.regex(/^[A-Za-z0-9_-]{6,32}$/));

/** A name that expressions can use: `I`, `V_exit`, `on`. */
export const symbolSchema = z.string().check(z.regex(symbolPattern));

/** Handle of a trace inside its entry. */
export const handleSchema = z.string().check(z.regex(/^[A-Za-z][A-Za-z0-9_]{0,31}$/));

/** A quantity as its author typed it (`1e9 V/A ± 50 ppm`), with where it was taken from. */
export const statedQuantitySchema = z.strictObject({
  text: z.string().check(z.maxLength(200)),
  source: z.string().check(z.maxLength(300)),
});

/**
 * One column of the file. `unit` null means that neither the file nor the author has stated it yet: it is asked for,
 * and no calculation uses the column before. `gain` divides (V/A for an amplifier) and `offset` is taken off first,
 * both in the column's own unit: quantity = (raw · unit − offset) / gain.
 */
export const traceColumnSettingsSchema = z.strictObject({
  name: z.string().check(z.maxLength(300)),
  symbol: symbolSchema,
  unit: z.nullable(z.string().check(z.maxLength(60))),
  gain: z.nullable(statedQuantitySchema),
  offset: z.nullable(statedQuantitySchema),
});

export const scanKinds = ['on-off', 'waiting-time', 'staircase', 'stability', 'map', 'other'] as const;

const note = z.nullable(z.string().check(z.maxLength(200)));

export const traceSettingsSchema = z.strictObject({
  columns: z.array(traceColumnSettingsSchema).check(z.maxLength(256)),
  scanKind: z.nullable(z.enum(scanKinds)),
  /** Whether the sign of the current columns is as recorded or is to be turned, and what a positive current means. */
  sign: z.nullable(z.enum(['as recorded', 'reversed'])),
  signConvention: note,
  /** Quantities as typed; each may be empty. load + wait + eject ≤ 1/frequency is checked. */
  drive: z.strictObject({ frequency: note, waveform: note, amplitude: note, load: note, wait: note, eject: note }),
  instrument: z.strictObject({ name: note, range: note, bandwidth: note, integrationTime: note, overload: note }),
  sweepDirection: z.nullable(z.enum(['up', 'down', 'both'])),
});

/** A named set of intervals of one column, in the unit of that column as stated in the settings. */
export const spanSchema = z.strictObject({
  name: symbolSchema,
  axis: symbolSchema,
  intervals: z.array(z.tuple([z.number(), z.number()])).check(z.minLength(1), z.maxLength(200)),
});

export const traceViewSchema = z.strictObject({
  x: z.nullable(z.string().check(z.maxLength(70))),
  y: z.array(z.string().check(z.maxLength(70))).check(z.maxLength(8)),
  logX: z.boolean(),
  logY: z.boolean(),
  range: z.nullable(z.tuple([z.number(), z.number()])),
});

export const traceNodeSchema = z.strictObject({
  id: blockIdSchema,
  traceId: z.uuid(),
  handle: handleSchema,
  settings: traceSettingsSchema,
  spans: z.array(spanSchema).check(z.maxLength(200)),
  view: traceViewSchema,
});

/**
 * A value. `source` is the line as typed (`P_esc = (I_on - I_off)/(e*f)`), `shown` the result as its author last saw it
 * (`0.9191(47)`), which the server compares with its own when a version is cut.
 */
export const valueNodeSchema = z.strictObject({
  id: blockIdSchema,
  source: z.string().check(z.maxLength(2000)),
  unit: z.nullable(z.string().check(z.maxLength(60))),
  digits: z.nullable(z.int().check(z.gte(1), z.lte(4))),
  shown: z.nullable(z.string().check(z.maxLength(400))),
});

export const equationNodeSchema = z.strictObject({ tex: z.string().check(z.maxLength(8000)) });

/** Time by the browser's clock, with its zone offset: `2026-11-19T09:14:05+01:00`. */
export const clockTimeSchema = z.iso.datetime({ offset: true });

export const logLineNodeSchema = z.strictObject({ id: blockIdSchema, at: clockTimeSchema });

export const cautionNodeSchema = z.strictObject({
  id: blockIdSchema,
  acknowledgedAt: z.nullable(clockTimeSchema),
  acknowledgedBy: z.nullable(z.string().check(z.maxLength(200))),
});

export const pictureNodeSchema = z.strictObject({
  id: blockIdSchema,
  pictureId: z.uuid(),
  alt: z.string().check(z.maxLength(1000)),
  caption: z.string().check(z.maxLength(1000)),
});

export type TraceSettings = z.infer<typeof traceSettingsSchema>;
export type TraceColumnSettings = z.infer<typeof traceColumnSettingsSchema>;
export type StatedQuantity = z.infer<typeof statedQuantitySchema>;
export type Span = z.infer<typeof spanSchema>;
export type TraceView = z.infer<typeof traceViewSchema>;
export type TraceNodeAttributes = z.infer<typeof traceNodeSchema>;
export type ValueNodeAttributes = z.infer<typeof valueNodeSchema>;
