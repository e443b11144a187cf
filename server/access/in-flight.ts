import 'server-only';
import { AppError } from '@/lib/errors/app-error';

type State = { running: number; stopping: boolean; idle: (() => void) | null };
const holder = globalThis as typeof globalThis & { kelvinleafRequests?: State };
const state = () => (holder.kelvinleafRequests ??= { running: 0, stopping: false, idle: null });

/** Runs a request unless the server is stopping; `drained` waits for it. */
export async function inFlight<T>(work: () => Promise<T>): Promise<T> {
  const s = state();
  if (s.stopping)
    throw new AppError(
      'unavailable',
      'The server is stopping. Your text is kept in this browser and sent when it is back.',
    );
  s.running += 1;
  try {
    return await work();
  } finally {
    s.running -= 1;
    if (s.running === 0) s.idle?.();
  }
}

/** Refuses new requests and resolves when the last one that was let in has been answered. */
export async function drained(): Promise<void> {
  const s = state();
  s.stopping = true;
  if (s.running > 0) await new Promise<void>((resolve) => (s.idle = resolve));
}
