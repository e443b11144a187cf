import { z } from 'zod';
import { blockStampSchema } from '@/lib/schemas/entry';
import { spanSchema, traceSettingsSchema } from './attributes';

const personSchema = z.object({ id: z.string(), name: z.string() }).strict();

/** A calculated result as bound: numbers as decimal text, since a reader in another language must find the same digits. */
export const boundValueSchema = z
  .object({
    id: z.string(),
    source: z.string(),
    symbol: z.string().nullable(),
    state: z.enum(['ok', 'error', 'pending']),
    text: z.string().nullable(),
    value: z.string().nullable(),
    unit: z.string().nullable(),
    u: z.string().nullable(),
    dof: z.string().nullable(),
    error: z.string().nullable(),
    /** The whole result as shown, for the reader's page. */
    result: z.record(z.string(), z.unknown()),
  })
  .strict();

export const boundTraceSchema = z
  .object({
    handle: z.string(),
    traceId: z.string(),
    fileName: z.string(),
    mediaType: z.string(),
    bytes: z.number().int(),
    sha256: z.string().length(64),
    rows: z.number().int(),
    settings: traceSettingsSchema,
    spans: z.array(spanSchema),
  })
  .strict();

/** The closed schema of a version. Its canonical bytes (RFC 8785) are what is hashed, stored and signed. */
export const versionRecordSchema = z
  .object({
    format: z.literal('kelvinleaf-version'),
    number: z.literal(1),
    installation: z.string(),
    notebook: z.string(),
    leaf: z.number().int(),
    entry: z.string(),
    seq: z.number().int(),
    title: z.string(),
    workDate: z.string(),
    cooldown: z.object({ id: z.string(), name: z.string() }).strict().nullable(),
    devices: z.array(z.object({ id: z.string(), name: z.string() }).strict()),
    documentSchema: z.number().int(),
    document: z.record(z.string(), z.unknown()),
    stamps: z.record(z.string(), blockStampSchema),
    engine: z.string(),
    values: z.array(boundValueSchema),
    traces: z.array(boundTraceSchema),
    pictures: z.array(
      z
        .object({
          pictureId: z.string(),
          fileName: z.string(),
          mediaType: z.string(),
          bytes: z.number().int(),
          sha256: z.string().length(64),
        })
        .strict(),
    ),
    questions: z.array(
      z
        .object({
          id: z.string(),
          text: z.string(),
          askedBy: z.string(),
          askedAt: z.string(),
          answers: z.array(z.string()),
        })
        .strict(),
    ),
    author: personSchema,
    contributors: z.array(personSchema),
    cutBy: personSchema,
    time: z.string(),
    reason: z.string().nullable(),
    previous: z.string().length(64).nullable(),
  })
  .strict();

export type VersionRecord = z.infer<typeof versionRecordSchema>;
export type BoundValue = z.infer<typeof boundValueSchema>;
export type BoundTrace = z.infer<typeof boundTraceSchema>;

/** What the stored bytes say. */
export function readRecord(canonical: Uint8Array): VersionRecord {
  return versionRecordSchema.parse(JSON.parse(new TextDecoder().decode(canonical)));
}
