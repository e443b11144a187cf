import { z } from 'zod';

/**
 * Attributes of the document's own nodes, as stored in the editor's JSON and bound in every version.
 * The editor, the server's check and the evaluation read these and nothing else.
 */

/** Short random id of a block, unique within its entry; block stamps and questions point at it. */
export const blockIdSchema = z.string().regex(/^[A-Za-z0-9_-]{6,32}$/);

/** A name that expressions can use: `I`, `V_exit`, `on`. */
export const symbolSchema = z.string().regex(/^[A-Za-zΑ-Ωα-ωµ][A-Za-z0-9_Α-Ωα-ω]{0,63}$/);

/** Handle of a trace inside its entry. */
export const handleSchema = z.string().regex(/^[A-Za-z][A-Za-z0-9_]{0,31}$/);

/** A quantity as its author typed it (`1e9 V/A ± 50 ppm`), with where it was taken from. */
export const statedQuantitySchema = z.object({ text: z.string().max(200), source: z.string().max(300) }).strict();

/**
 * One column of the file. `unit` null means that neither the file nor the author has stated it yet: it is asked for,
 * and no calculation uses the column before. `gain` divides (V/A for an amplifier) and `offset` is taken off first,
 * both in the column's own unit: quantity = (raw · unit − offset) / gain.
 */
export const traceColumnSettingsSchema = z
  .object({
    name: z.string().max(300),
    symbol: symbolSchema,
    unit: z.string().max(60).nullable(),
    gain: statedQuantitySchema.nullable(),
    offset: statedQuantitySchema.nullable(),
  })
  .strict();

export const scanKinds = ['on-off', 'waiting-time', 'staircase', 'stability', 'map', 'other'] as const;

const note = z.string().max(200).nullable();

export const traceSettingsSchema = z
  .object({
    columns: z.array(traceColumnSettingsSchema).max(256),
    scanKind: z.enum(scanKinds).nullable(),
    /** Whether the sign of the current columns is as recorded or is to be turned, and what a positive current means. */
    sign: z.enum(['as recorded', 'reversed']).nullable(),
    signConvention: note,
    /** Quantities as typed; each may be empty. load + wait + eject ≤ 1/frequency is checked. */
    drive: z.object({ frequency: note, waveform: note, amplitude: note, load: note, wait: note, eject: note }).strict(),
    instrument: z.object({ name: note, range: note, bandwidth: note, integrationTime: note, overload: note }).strict(),
    sweepDirection: z.enum(['up', 'down', 'both']).nullable(),
  })
  .strict();

/** A named set of intervals of one column, in the unit of that column as stated in the settings. */
export const spanSchema = z
  .object({
    name: symbolSchema,
    axis: symbolSchema,
    intervals: z
      .array(z.tuple([z.number(), z.number()]))
      .min(1)
      .max(200),
  })
  .strict();

export const traceViewSchema = z
  .object({
    x: z.string().max(70).nullable(),
    y: z.array(z.string().max(70)).max(8),
    logX: z.boolean(),
    logY: z.boolean(),
    range: z.tuple([z.number(), z.number()]).nullable(),
  })
  .strict();

export const traceNodeSchema = z
  .object({
    id: blockIdSchema,
    traceId: z.uuid(),
    handle: handleSchema,
    settings: traceSettingsSchema,
    spans: z.array(spanSchema).max(200),
    view: traceViewSchema,
  })
  .strict();

/**
 * A value. `source` is the line as typed (`P_esc = (I_on - I_off)/(e*f)`), `shown` the result as its author last saw it
 * (`0.9191(47)`), which the server compares with its own when a version is cut.
 */
export const valueNodeSchema = z
  .object({
    id: blockIdSchema,
    source: z.string().max(2000),
    unit: z.string().max(60).nullable(),
    digits: z.number().int().min(1).max(4).nullable(),
    shown: z.string().max(400).nullable(),
  })
  .strict();

export const equationNodeSchema = z.object({ tex: z.string().max(8000) }).strict();

/** Time by the browser's clock, with its zone offset: `2026-11-19T09:14:05+01:00`. */
export const clockTimeSchema = z.iso.datetime({ offset: true });

export const logLineNodeSchema = z.object({ id: blockIdSchema, at: clockTimeSchema }).strict();

export const cautionNodeSchema = z
  .object({
    id: blockIdSchema,
    acknowledgedAt: clockTimeSchema.nullable(),
    acknowledgedBy: z.string().max(200).nullable(),
  })
  .strict();

export const pictureNodeSchema = z
  .object({ id: blockIdSchema, pictureId: z.uuid(), alt: z.string().max(1000), caption: z.string().max(1000) })
  .strict();

export type TraceSettings = z.infer<typeof traceSettingsSchema>;
export type TraceColumnSettings = z.infer<typeof traceColumnSettingsSchema>;
export type StatedQuantity = z.infer<typeof statedQuantitySchema>;
export type Span = z.infer<typeof spanSchema>;
export type TraceView = z.infer<typeof traceViewSchema>;
export type TraceNodeAttributes = z.infer<typeof traceNodeSchema>;
export type ValueNodeAttributes = z.infer<typeof valueNodeSchema>;
