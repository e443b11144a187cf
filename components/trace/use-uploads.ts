'use client';

import { useCallback, useEffect, useRef, useState } from 'react';
import { Interrupted, sendFile, type Kind, type Sending, type SendStage } from './send-file';

export type Upload = {
  id: string;
  kind: Kind;
  name: string;
  bytes: number;
  done: number;
  state: 'waiting' | SendStage | 'paused' | 'broken off' | 'received' | 'refused';
  /** A sentence, where it broke off or was refused. */
  problem: string | null;
};

type Held = { file: File; sending: Sending | null; abort: AbortController; position: number | null };

const atOnce = 2;

/**
 * Uploads of one entry. `onReceived` gets the id of each received file, and the place it was dropped at.
 * While one runs, leaving the page asks first.
 */
export function useUploads(
  entryId: string,
  onReceived: (kind: Kind, id: string, file: File, position: number | null) => void,
) {
  const [uploads, setUploads] = useState<Upload[]>([]);
  const held = useRef(new Map<string, Held>());
  const received = useRef(onReceived);
  useEffect(() => {
    received.current = onReceived;
  });

  const change = useCallback((id: string, part: Partial<Upload>) => {
    setUploads((all) => all.map((upload) => (upload.id === id ? { ...upload, ...part } : upload)));
  }, []);

  const start = useCallback(
    (id: string, kind: Kind) => {
      const item = held.current.get(id);
      if (!item) return;
      item.abort = new AbortController();
      change(id, { state: 'reading', problem: null });
      const sending = sendFile({
        entryId,
        kind,
        file: item.file,
        signal: item.abort.signal,
        onProgress: (state, done) => {
          // A paused upload may report once more.
          setUploads((all) =>
            all.map((upload) => (upload.id === id && upload.state !== 'paused' ? { ...upload, state, done } : upload)),
          );
        },
      });
      item.sending = sending;
      sending.traceId.then(
        (traceId) => {
          change(id, { state: 'received', done: item.file.size });
          held.current.delete(id);
          received.current(kind, traceId, item.file, item.position);
        },
        (error: unknown) => {
          if (item.abort.signal.aborted) return;
          const problem = error instanceof Error ? error.message : String(error);
          change(id, { state: error instanceof Interrupted ? 'broken off' : 'refused', problem });
        },
      );
    },
    [entryId, change],
  );

  // A few at a time: the others wait their turn.
  useEffect(() => {
    const busy = uploads.filter(
      ({ state }) => state === 'reading' || state === 'sending' || state === 'recording',
    ).length;
    for (const { id, kind } of uploads.filter(({ state }) => state === 'waiting').slice(0, Math.max(0, atOnce - busy)))
      start(id, kind);
  }, [uploads, start]);

  const unfinished = uploads.some(({ state }) => !['received', 'refused'].includes(state));
  useEffect(() => {
    if (!unfinished) return;
    const ask = (event: BeforeUnloadEvent) => event.preventDefault();
    window.addEventListener('beforeunload', ask);
    return () => window.removeEventListener('beforeunload', ask);
  }, [unfinished]);

  const again = useCallback((id: string) => change(id, { state: 'waiting', problem: null }), [change]);
  useEffect(() => {
    const online = () => {
      for (const { id, state } of uploads) if (state === 'broken off') again(id);
    };
    window.addEventListener('online', online);
    return () => window.removeEventListener('online', online);
  }, [uploads, again]);

  const attach = useCallback((kind: Kind, files: File[], position: number | null = null) => {
    const added = files.map((file): Upload => {
      const id = crypto.randomUUID();
      held.current.set(id, { file, sending: null, abort: new AbortController(), position });
      return { id, kind, name: file.name, bytes: file.size, done: 0, state: 'waiting', problem: null };
    });
    setUploads((all) => [...all.filter(({ state }) => state !== 'received'), ...added]);
  }, []);

  const pause = useCallback(
    (id: string) => {
      held.current.get(id)?.sending?.pause();
      change(id, { state: 'paused' });
    },
    [change],
  );

  const resume = useCallback(
    (id: string) => {
      change(id, { state: 'sending' });
      held.current.get(id)?.sending?.resume();
    },
    [change],
  );

  /** Takes it off the list; what the server holds of it is swept there. */
  const dismiss = useCallback((id: string) => {
    const item = held.current.get(id);
    item?.abort.abort();
    item?.sending?.pause();
    held.current.delete(id);
    setUploads((all) => all.filter((upload) => upload.id !== id));
  }, []);

  return { uploads, attach, pause, resume, again, dismiss };
}

export type Uploads = ReturnType<typeof useUploads>;
