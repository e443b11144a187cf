'use client';

import type { Editor } from '@tiptap/core';
import { useCallback, useEffect, useMemo, useRef, useState } from 'react';
import type { TraceDto } from '@/lib/schemas/entry';
import type { EditorHost } from '@/components/editor/actions';
import { insertPicture } from '@/components/editor/picture/extension';
import { insertTrace } from '@/components/editor/trace/extension';
import { request } from '@/components/hooks/request';
import type { SendOptions, SendStage } from '@/components/trace/send-file';

export type Attachment = {
  key: string;
  kind: 'trace' | 'picture';
  name: string;
  done: number;
  of: number;
  state: 'sending' | 'paused' | 'reading' | 'failed';
  /** What the sending is at; pausing is possible while bytes travel. */
  stage: SendStage;
  problem: string | null;
};

/** Sends one file; resolves with the id that the server gave it. */
export type SendFile = (kind: 'trace' | 'picture', file: File, options: SendOptions) => Promise<string>;

type Options = {
  entryId: string;
  editor: () => Editor | null;
  send: SendFile;
  onTrace: (trace: TraceDto) => void;
};

const wait = (ms: number) => new Promise((resolve) => setTimeout(resolve, ms));

/** Waits until the server has read the file; gives it up after a minute, when the trace stays in the entry unread. */
async function whenRead(traceId: string, signal: AbortSignal): Promise<TraceDto> {
  for (let tries = 0; ; tries += 1) {
    const trace = await request<TraceDto>('GET', `/api/traces/${encodeURIComponent(traceId)}`, undefined, { signal });
    if (trace.state !== 'received' || tries >= 60) return trace;
    await wait(Math.min(250 * (tries + 1), 1000));
  }
}

/** Files on their way into the entry: dropped, pasted or chosen; each lands at its place as a trace or a picture. */
export function useAttachments({ entryId, editor, send, onTrace }: Options) {
  const [attachments, setAttachments] = useState<Attachment[]>([]);
  const stops = useRef(new Map<string, AbortController>());
  const controls = useRef(new Map<string, { pause: () => void; resume: () => void }>());
  const retries = useRef(new Map<string, () => void>());
  const inputs = useRef<{ trace: HTMLInputElement | null; picture: HTMLInputElement | null }>({
    trace: null,
    picture: null,
  });

  const change = useCallback((key: string, part: Partial<Attachment> | null) => {
    setAttachments((all) =>
      part === null
        ? all.filter((item) => item.key !== key)
        : all.map((item) => (item.key === key ? { ...item, ...part } : item)),
    );
  }, []);

  const start = useCallback(
    (kind: 'trace' | 'picture', file: File, position: number | null) => {
      const key = crypto.randomUUID();
      setAttachments((all) => [
        ...all,
        { key, kind, name: file.name, done: 0, of: file.size, state: 'sending', stage: 'reading', problem: null },
      ]);
      const go = async () => {
        const stop = new AbortController();
        stops.current.set(key, stop);
        change(key, { state: 'sending', problem: null, done: 0 });
        try {
          const onProgress = (done: number, of: number, stage: SendStage) => change(key, { done, of, stage });
          const onControl: SendOptions['onControl'] = (control) => controls.current.set(key, control);
          const id = await send(kind, file, { entryId, signal: stop.signal, onProgress, onControl });
          const target = editor();
          if (kind === 'picture') {
            if (target) insertPicture(target, id);
          } else {
            change(key, { state: 'reading' });
            const trace = await whenRead(id, stop.signal);
            onTrace(trace);
            const size = target?.state.doc.content.size ?? 0;
            if (target) insertTrace(target, trace, position === null ? undefined : Math.min(position, size));
          }
          change(key, null);
        } catch (error) {
          if (stop.signal.aborted) change(key, null);
          else {
            const why = error instanceof Error ? error.message : 'The connection failed.';
            change(key, { state: 'failed', problem: why });
          }
        }
      };
      retries.current.set(key, () => void go());
      void go();
    },
    [change, editor, entryId, onTrace, send],
  );

  const host = useMemo<EditorHost>(
    () => ({
      choose: (kind) => inputs.current[kind]?.click(),
      attach: (kind, files, position) => files.forEach((file) => start(kind, file, position)),
    }),
    [start],
  );
  const cancel = useCallback(
    (key: string) => {
      stops.current.get(key)?.abort();
      change(key, null);
    },
    [change],
  );
  const retry = useCallback((key: string) => retries.current.get(key)?.(), []);
  const pause = useCallback(
    (key: string) => {
      controls.current.get(key)?.pause();
      change(key, { state: 'paused' });
    },
    [change],
  );
  const resume = useCallback(
    (key: string) => {
      change(key, { state: 'sending' });
      controls.current.get(key)?.resume();
    },
    [change],
  );
  const unfinished = attachments.length > 0;
  useEffect(() => {
    if (!unfinished) return;
    const ask = (event: BeforeUnloadEvent) => event.preventDefault();
    window.addEventListener('beforeunload', ask);
    return () => window.removeEventListener('beforeunload', ask);
  }, [unfinished]);
  return { attachments, host, inputs, cancel, retry, pause, resume };
}
