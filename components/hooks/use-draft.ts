'use client';

import { useCallback, useEffect, useMemo, useRef, useState, useSyncExternalStore } from 'react';
import type { DraftSnapshot, KeptDraft } from '@/lib/draft/contract';
import { DraftSaver } from '@/lib/draft/saver';
import type { DocumentJson } from '@/lib/document/json';
import { sameDocument } from '@/lib/document/same';
import { AppError } from '@/lib/errors/app-error';
import type { DraftDto, PersonDto, VersionDto } from '@/lib/schemas/entry';
import { browserPorts, measureClockOffset } from '@/components/entry/draft-ports';
import { forgetDraft, holdWindow, keptDrafts, openWindows } from '@/components/entry/draft-store';
import { request, Unreachable } from './request';

const idleBeforeVersion = 10 * 60 * 1000;
const clockAgain = 60 * 60 * 1000;

export type DraftFace = DraftSnapshot & {
  change: (title: string, doc: DocumentJson, changed: readonly string[]) => void;
  resolve: (title: string, doc: DocumentJson, changed: readonly string[]) => void;
  resume: () => void;
  flush: () => Promise<boolean>;
  /** Cuts a version from the acknowledged draft; gives the version, or the sentence why not. */
  cutVersion: (reason: string | null, quiet?: boolean) => Promise<VersionDto | null>;
  cutting: boolean;
  versionProblem: {
    message: string;
    differing: { id: string; symbol: string; shown: string; computed: string }[];
  } | null;
  /** Text of an earlier window that was taken up again. */
  restored: { keptAt: string } | null;
  /** Text of further closed windows, still to be compared. */
  leftOver: KeptDraft[];
  dropLeftOver: (kept: KeptDraft) => void;
  text: () => { title: string; doc: DocumentJson };
};

type Options = {
  draft: DraftDto;
  person: PersonDto;
  build: string;
  /** The text changed under the editor: restored, or taken over from another window. */
  onText: (title: string, doc: DocumentJson) => void;
};

/** Keeps, sends and restores the draft of one entry for one person in this window. */
export function useDraft({ draft, person, build, onText }: Options): DraftFace {
  const { entryId } = draft;
  const [windowId] = useState(() => crypto.randomUUID());
  const offset = useRef(0);
  const saver = useMemo(() => {
    const ports = browserPorts({ personId: person.id, entryId, windowId }, () => offset.current);
    const { revision, title, doc, stamps, savedAt } = draft;
    return new DraftSaver(ports, { revision, title, doc, stamps, savedAt, build });
    // The draft that the page came with starts the saver; later ones reach it through adopt().
    // eslint-disable-next-line react-hooks/exhaustive-deps -- see above
  }, [entryId, person.id, windowId]);
  const snapshot = useSyncExternalStore(saver.subscribe, saver.read, saver.read);
  const [restored, setRestored] = useState<{ keptAt: string } | null>(null);
  const [leftOver, setLeftOver] = useState<KeptDraft[]>([]);
  const [cutting, setCutting] = useState(false);
  const [versionProblem, setVersionProblem] = useState<DraftFace['versionProblem']>(null);
  /** Whether anything changed since the last version that this window cut. */
  const uncut = useRef(false);
  const lastChange = useRef(0);
  const takeText = useRef(onText);
  takeText.current = onText;
  /** Takes over the server's draft where nothing here is unsent. */
  const follow = useRef<() => Promise<void>>(() => Promise.resolve());

  useEffect(() => {
    let gone = false;
    const measure = () =>
      void measureClockOffset().then((measured) => {
        if (measured !== null) offset.current = measured;
      });
    measure();
    const timer = setInterval(measure, clockAgain);
    const release = holdWindow(windowId);
    void takeUp(person.id, entryId).then(
      ([first, ...others]) => {
        if (gone) return;
        setLeftOver(others);
        if (!first) return;
        if (!saver.read().unsent) {
          void saver
            .restore(first)
            .then((kept) => (kept ? forgetDraft(person.id, entryId, first.windowId) : undefined));
          uncut.current = true;
          setRestored({ keptAt: first.keptAt });
          takeText.current(first.title, first.doc);
        } else setLeftOver([first, ...others]);
      },
      () => undefined, // No store, nothing kept; the saver itself says that nothing is kept from now on.
    );
    return () => {
      gone = true;
      clearInterval(timer);
      release();
    };

    async function takeUp(personId: string, entry: string): Promise<KeptDraft[]> {
      const [kept, open] = await Promise.all([keptDrafts(personId, entry), openWindows()]);
      const text = saver.text();
      const own = kept.filter((item) => !open.has(item.windowId));
      const differing = own.filter((item) => !sameDocument(item.doc, text.doc) || item.title !== text.title);
      for (const item of own) if (!differing.includes(item)) await forgetDraft(personId, entry, item.windowId);
      return differing;
    }
  }, [saver, windowId, person.id, entryId]);

  const cutVersion = useCallback(
    async (reason: string | null, quiet = false): Promise<VersionDto | null> => {
      if (!(await saver.flush())) return null;
      setCutting(true);
      try {
        const body = { basedOn: saver.read().revision, reason };
        const version = await request<VersionDto>('POST', `/api/entries/${encodeURIComponent(entryId)}/versions`, body);
        uncut.current = false;
        setVersionProblem(null);
        return version;
      } catch (error) {
        if (error instanceof AppError && error.code === 'signed_out') saver.sessionEnded();
        else if (error instanceof AppError && error.code === 'conflict') await follow.current();
        else if (error instanceof AppError || error instanceof Unreachable) {
          const details = error instanceof AppError ? error.details : undefined;
          const differing = (details?.differing ?? []) as {
            id: string;
            symbol: string;
            shown: string;
            computed: string;
          }[];
          if (!quiet || differing.length > 0) setVersionProblem({ message: error.message, differing });
        } else throw error;
        return null;
      } finally {
        setCutting(false);
      }
    },
    [saver, entryId],
  );

  useEffect(() => {
    const channel =
      typeof BroadcastChannel === 'undefined' ? null : new BroadcastChannel(`kelvinleaf/${person.id}/${entryId}`);
    let told = saver.read().revision;
    const unsubscribe = saver.subscribe(() => {
      const { revision, status } = saver.read();
      if (status.kind === 'saved' && revision > told) {
        told = revision;
        channel?.postMessage({ revision });
      }
    });
    follow.current = async () => {
      if (saver.read().unsent) return;
      const current = await request<DraftDto>('GET', `/api/entries/${encodeURIComponent(entryId)}/draft`);
      if (current.revision > saver.read().revision && saver.adopt(current)) {
        told = current.revision;
        takeText.current(current.title, current.doc);
      }
    };
    if (channel) {
      channel.onmessage = (event: MessageEvent<{ revision: number }>) => {
        if (event.data.revision > saver.read().revision) follow.current().catch(() => undefined); // The next save would tell.
      };
    }
    const online = () => saver.resume();
    const hidden = () => {
      if (document.visibilityState === 'hidden') saver.leave();
    };
    const leaving = () => {
      saver.leave();
      const { unsent, revision } = saver.read();
      if (unsent || !uncut.current) return;
      const body = new Blob([JSON.stringify({ basedOn: revision, reason: null })], { type: 'application/json' });
      uncut.current = !navigator.sendBeacon?.(`/api/entries/${encodeURIComponent(entryId)}/versions`, body);
    };
    const ask = (event: BeforeUnloadEvent) => {
      const { unsent, keeps } = saver.read();
      if (unsent && !keeps) event.preventDefault();
    };
    const idle = setInterval(() => {
      if (uncut.current && Date.now() - lastChange.current > idleBeforeVersion && !saver.read().unsent)
        void cutVersion(null, true);
    }, 30_000);
    window.addEventListener('online', online);
    window.addEventListener('pagehide', leaving);
    window.addEventListener('beforeunload', ask);
    document.addEventListener('visibilitychange', hidden);
    return () => {
      unsubscribe();
      channel?.close();
      clearInterval(idle);
      window.removeEventListener('online', online);
      window.removeEventListener('pagehide', leaving);
      window.removeEventListener('beforeunload', ask);
      document.removeEventListener('visibilitychange', hidden);
      // Leaving for another page of the application: the text goes, and a version with it.
      if (uncut.current) void cutVersion(null, true);
      saver.leave();
    };
  }, [saver, person.id, entryId, cutVersion]);

  const change = useCallback(
    (title: string, doc: DocumentJson, changed: readonly string[]) => {
      uncut.current = true;
      lastChange.current = Date.now();
      saver.change(title, doc, changed);
    },
    [saver],
  );
  const resolve = useCallback<DraftFace['resolve']>((...args) => saver.resolve(...args), [saver]);
  const resume = useCallback(() => saver.resume(), [saver]);
  const flush = useCallback(() => saver.flush(), [saver]);
  const text = useCallback(() => saver.text(), [saver]);
  const dropLeftOver = useCallback(
    (kept: KeptDraft) => {
      setLeftOver((all) => all.filter((item) => item.key !== kept.key));
      void forgetDraft(person.id, entryId, kept.windowId);
    },
    [person.id, entryId],
  );
  return {
    ...snapshot,
    change,
    resolve,
    resume,
    flush,
    cutVersion,
    cutting,
    versionProblem,
    restored,
    leftOver,
    dropLeftOver,
    text,
  };
}
