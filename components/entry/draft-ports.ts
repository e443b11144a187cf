import type { DraftPorts, SaveReply, Sending } from '@/lib/draft/contract';
import { clockTime } from '@/lib/document/clock-time';
import { AppError } from '@/lib/errors/app-error';
import type { DraftDto } from '@/lib/schemas/entry';
import { refusalIn } from '@/components/hooks/request';
import { forgetDraft, keepDraft } from './draft-store';

type Owner = { personId: string; entryId: string; windowId: string };

/** Browsers give a request that outlives its page 64 kB at most (Fetch Standard, "keepalive"). */
const longestLeaving = 60_000;

async function putDraft({ entryId, personId }: Owner, sending: Sending, leaving: boolean): Promise<SaveReply> {
  const body = JSON.stringify(sending);
  const response = await fetch(`/api/entries/${encodeURIComponent(entryId)}/draft`, {
    method: 'PUT',
    credentials: 'same-origin',
    headers: { 'content-type': 'application/json', 'x-kelvinleaf-writer': personId },
    body,
    keepalive: leaving && new Blob([body]).size < longestLeaving,
  });
  if (response.ok) {
    const saved = (await response.json()) as Pick<DraftDto, 'revision' | 'savedAt' | 'stamps'>;
    return { kind: 'saved', ...saved, build: response.headers.get('x-kelvinleaf-build') };
  }
  const refusal = await refusalIn(response);
  if (!(refusal instanceof AppError)) return { kind: 'unreachable' };
  const after = Number(response.headers.get('retry-after'));
  return {
    kind: 'refused',
    code: refusal.code,
    message: refusal.message,
    current: (refusal.details?.current as DraftDto | undefined) ?? null,
    retryAfterMs: Number.isFinite(after) && after > 0 ? after * 1000 : null,
  };
}

/** The saver's world in a browser. */
export function browserPorts(owner: Owner, clockOffsetMs: () => number): DraftPorts {
  return {
    send: (body, leaving) => putDraft(owner, body, leaving),
    keep: (draft) => keepDraft({ ...draft, ...owner }),
    forget: () => forgetDraft(owner.personId, owner.entryId, owner.windowId),
    now: () => new Date(),
    clockTime,
    newId: () => crypto.randomUUID(),
    schedule: (run, ms) => {
      const timer = setTimeout(run, ms);
      return () => clearTimeout(timer);
    },
    clockOffsetMs,
  };
}

/** Browser's clock minus the server's, in ms, to within half the time of the round trip; null when it cannot be asked. */
export async function measureClockOffset(): Promise<number | null> {
  try {
    const sent = Date.now();
    const response = await fetch('/api/session', { credentials: 'same-origin', cache: 'no-store' });
    const received = Date.now();
    const { serverTime } = (await response.json()) as { serverTime: string };
    const offset = (sent + received) / 2 - Date.parse(serverTime);
    return Number.isFinite(offset) ? Math.round(offset) : null;
  } catch {
    // Offline: the offset measured before stays the best that is known.
    return null;
  }
}
