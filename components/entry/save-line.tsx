'use client';

import { useEffect, useRef, useState, useSyncExternalStore } from 'react';
import type { DraftFace } from '@/components/hooks/use-draft';

const clock = (iso: string) =>
  new Date(iso).toLocaleTimeString('en-GB', { hour: '2-digit', minute: '2-digit', second: '2-digit' });

/** What the quiet line says of the text's whereabouts. */
export function savedWords({ status, keeps }: Pick<DraftFace, 'status' | 'keeps'>): string {
  switch (status.kind) {
    case 'saved':
      return status.at ? `saved ${clock(status.at)}` : 'saved';
    case 'kept': {
      const where = keeps ? 'kept in this browser, not yet on the server' : 'not yet on the server';
      return status.why === 'unreachable' ? `${where}; it cannot be reached, trying again` : where;
    }
    case 'conflict':
      return 'another window changed this entry: compare';
    case 'signed-out':
      return 'your session has ended; the text is kept in this browser';
    case 'refused':
    case 'frozen':
      return status.message;
  }
}

const never = () => () => undefined;

type Props = { draft: DraftFace; onCompare: () => void; onRenew: () => void };

/** The quiet line about saving, with the one thing to do where there is one. */
export function SaveLine({ draft, onCompare, onRenew }: Props) {
  const { status, keeps, outdated, restored, versionProblem } = draft;
  // The server does not know the reader's zone: it leaves the time out, and the browser puts it in.
  const inBrowser = useSyncExternalStore(
    never,
    () => true,
    () => false,
  );
  const words = status.kind === 'saved' && !inBrowser ? 'saved' : savedWords(draft);
  const announced = useAnnouncement(
    status.kind === 'kept' ? `kept ${status.why === 'unreachable'}` : status.kind,
    words,
  );
  return (
    <div className="save-line">
      <span
        className={`save-words ${status.kind === 'saved' || status.kind === 'kept' ? 'text-quiet' : 'text-attention'}`}
      >
        {words}
      </span>
      <span role="status" className="sr-only">
        {announced}
      </span>
      {status.kind === 'conflict' ? (
        <button type="button" className="small-press" onClick={onCompare}>
          Compare
        </button>
      ) : null}
      {status.kind === 'signed-out' ? (
        <button type="button" className="small-press" onClick={onRenew}>
          Sign in again
        </button>
      ) : null}
      {status.kind === 'refused' || (status.kind === 'kept' && status.why === 'unreachable') ? (
        <button type="button" className="small-press" onClick={draft.resume}>
          Try now
        </button>
      ) : null}
      {status.kind === 'frozen' ? (
        <span>
          The text stays in this browser. Copy what you need, or amend the entry. <a href="">Show the entry</a>
        </span>
      ) : null}
      {draft.cutting ? <span className="text-quiet"> cutting a version</span> : null}
      {!keeps ? (
        <p className="save-notice" role="alert">
          This browser keeps nothing on its own (private window, or its storage is full or switched off). Text that the
          server does not have yet is lost if this page closes.
        </p>
      ) : null}
      {restored ? (
        <p className="save-notice">
          Text that had not reached the server, kept {restored.keptAt.slice(0, 10)} {clock(restored.keptAt)}, was taken
          up again.
        </p>
      ) : null}
      {outdated ? (
        <p className="save-notice">
          Kelvinleaf was upgraded.{' '}
          <button
            type="button"
            className="small-press"
            onClick={() => void draft.flush().then(() => window.location.reload())}
          >
            Reload
          </button>{' '}
          when it suits you; the draft is kept.
        </p>
      ) : null}
      {versionProblem ? (
        <div className="save-notice" role="alert">
          <p>No version was cut: {versionProblem.message} The draft is kept.</p>
          {versionProblem.differing.length > 0 ? (
            <ul>
              {versionProblem.differing.map((value) => (
                <li key={value.id}>
                  {value.symbol}: shown {value.shown}, the server finds {value.computed}
                </li>
              ))}
            </ul>
          ) : null}
        </div>
      ) : null}
    </div>
  );
}

/** Speaks when the kind of state changes, not with each save: a screen reader would never fall silent. */
function useAnnouncement(kind: string, words: string): string {
  const last = useRef(kind);
  const [said, setSaid] = useState('');
  useEffect(() => {
    const ordinary = (state: string) => state === 'saved' || state === 'kept false';
    if (last.current !== kind && !(ordinary(last.current) && ordinary(kind))) setSaid(words);
    last.current = kind;
  }, [kind, words]);
  return said;
}
