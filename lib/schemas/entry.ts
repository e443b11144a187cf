import { z } from 'zod';
import type { DocumentJson } from '@/lib/document/json';
import type { ValueResult } from '@/lib/expression/contract';

/** States of an entry; the words beside the stair are in components/ui/stair. */
export const entryStates = ['draft', 'signed', 'witnessed', 'struck out'] as const;
export type EntryState = (typeof entryStates)[number];

export const titleSchema = z.string().trim().min(1, 'An entry needs a title.').max(300);
export const workDateSchema = z.iso.date();

/** When a block was first written and last changed: `at` by the writer's clock, `received` by the server's. */
export const stampSchema = z
  .object({
    at: z.iso.datetime({ offset: true }),
    received: z.iso.datetime({ offset: true }),
    by: z.string(),
    /** The writer's clock minus the server's, as measured then, in ms. */
    offsetMs: z.number(),
  })
  .strict();
export const blockStampSchema = z.object({ first: stampSchema, last: stampSchema, digest: z.string() }).strict();
export type BlockStamp = z.infer<typeof blockStampSchema>;
export type BlockStamps = Record<string, BlockStamp>;

/** PUT /api/entries/[id]/draft. `basedOn` is the revision that the editor had loaded or had acknowledged last. */
export const saveDraftSchema = z
  .object({
    basedOn: z.number().int().min(0),
    title: z.string().max(300),
    doc: z.looseObject({ type: z.literal('doc') }),
    /** Browser time per changed block id, and the browser clock's measured offset to the server in ms. */
    written: z.record(z.string(), z.iso.datetime({ offset: true })),
    clockOffsetMs: z.number().finite(),
    /** One per save attempt; a repeated one is answered with the first one's result. */
    saveId: z.uuid(),
  })
  .strict();
export type SaveDraft = z.infer<typeof saveDraftSchema>;

export type DraftDto = {
  entryId: string;
  revision: number;
  title: string;
  doc: DocumentJson;
  stamps: BlockStamps;
  savedAt: string;
  savedBy: PersonDto;
};

export type PersonDto = { id: string; name: string; initials: string };

/** A file in the entry: the facts that never change. What the author says of it stands in the document's trace node. */
export type TraceDto = {
  id: string;
  entryId: string | null;
  fileName: string;
  mediaType: string;
  bytes: number;
  sha256: string;
  state: 'received' | 'parsed' | 'unreadable';
  /** A sentence when `unreadable`. */
  problem: string | null;
  rows: number;
  /** As found in the file; symbol is a proposal for the node's settings. */
  columns: {
    name: string;
    symbol: string;
    unit: string | null;
    missing: number;
    min: number | null;
    max: number | null;
  }[];
  comments: string[];
  uploadedBy: PersonDto;
  receivedAt: string;
};

export type QuestionDto = {
  id: string;
  entryId: string;
  versionDigest: string;
  blockId: string | null;
  quote: string;
  text: string;
  askedBy: PersonDto;
  askedAt: string;
  state: 'open' | 'answered';
  answers: { id: string; text: string; by: PersonDto; at: string }[];
  mayAnswer: boolean;
};

export type SignatureDto = {
  id: string;
  kind: 'author' | 'witness';
  printedName: string;
  meaning: string;
  signedAt: string;
  zone: string;
  versionDigest: string;
  attestation: 'server';
  lateReason: string | null;
  statement: string;
};

/** What the entry page needs. `doc` is the draft for who may write it, else the head version's. */
export type EntryDto = {
  id: string;
  notebook: { code: string; title: string };
  leaf: number;
  title: string;
  workDate: string;
  state: EntryState;
  author: PersonDto;
  contributors: PersonDto[];
  cooldown: { id: string; name: string } | null;
  devices: { id: string; name: string }[];
  head: { id: string; seq: number; digest: string; createdAt: string; createdBy: PersonDto } | null;
  struckReason: string | null;
  questions: QuestionDto[];
  signatures: SignatureDto[];
  traces: TraceDto[];
  may: {
    write: boolean;
    ask: boolean;
    answer: boolean;
    sign: boolean;
    countersign: boolean;
    strikeOut: boolean;
    invite: boolean;
  };
  /** Why countersigning is refused now, as a sentence; null when it may go on or does not concern this reader. */
  countersignObstacle: string | null;
  /** How many of the version's traces this reader has been served. */
  seen: { traces: number; of: number };
  late: { days: number; limit: number } | null;
};

export type VersionDto = {
  id: string;
  entryId: string;
  seq: number;
  digest: string;
  previous: string | null;
  createdAt: string;
  createdBy: PersonDto;
  reason: string | null;
  title: string;
};

/** A version opened for reading: what was bound. */
export type VersionContentDto = VersionDto & {
  doc: DocumentJson;
  stamps: BlockStamps;
  values: ValueResult[];
  traces: { handle: string; traceId: string; fileName: string; sha256: string; bytes: number }[];
};
