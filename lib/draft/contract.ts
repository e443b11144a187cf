import type { DocumentJson } from '@/lib/document/json';
import type { ErrorCode } from '@/lib/errors/app-error';
import type { BlockStamps, DraftDto, SaveDraft } from '@/lib/schemas/entry';

/** One save as it goes over the wire. It is repeated word for word, under the same saveId, until its fate is known. */
export type Sending = SaveDraft;

/** What a browser keeps of an entry that the server has not acknowledged: by person, entry and window. */
export type KeptDraft = {
  key: string;
  personId: string;
  entryId: string;
  windowId: string;
  keptAt: string;
  revision: number;
  title: string;
  doc: DocumentJson;
  written: Record<string, string>;
  sending: Sending | null;
};

export type SaveReply =
  | { kind: 'saved'; revision: number; savedAt: string; stamps: BlockStamps; build: string | null }
  | { kind: 'refused'; code: ErrorCode; message: string; current: DraftDto | null; retryAfterMs: number | null }
  | { kind: 'unreachable' };

export type DraftStatus =
  | { kind: 'saved'; at: string | null }
  | { kind: 'kept'; why: 'resting' | 'sending' | 'unreachable' }
  | { kind: 'conflict'; current: DraftDto }
  | { kind: 'signed-out' }
  | { kind: 'refused'; message: string }
  | { kind: 'frozen'; message: string };

export type DraftSnapshot = {
  status: DraftStatus;
  revision: number;
  unsent: boolean;
  /** False once the browser's own store has failed: nothing outlives this window then. */
  keeps: boolean;
  /** The server runs another build than this page. */
  outdated: boolean;
  stamps: BlockStamps;
  /** Written times that the server has not stamped yet. */
  written: Record<string, string>;
};

/** The world as the saver sees it, so that a test can be the world. */
export type DraftPorts = {
  send: (body: Sending, leaving: boolean) => Promise<SaveReply>;
  keep: (draft: Omit<KeptDraft, 'key' | 'personId' | 'entryId' | 'windowId'>) => Promise<void>;
  forget: () => Promise<void>;
  now: () => Date;
  clockTime: (date: Date) => string;
  newId: () => string;
  schedule: (run: () => void, ms: number) => () => void;
  clockOffsetMs: () => number;
};

export const draftTimes = {
  keep: 100,
  rest: 800,
  longestRest: 10_000,
  firstRetry: 1000,
  longestRetry: 30_000,
} as const;
