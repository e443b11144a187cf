'use client';

import { useEffect, useState } from 'react';
import { ErrorSentence } from '@/components/ui/sentence';
import { useFetched } from '@/components/ui/use-fetched';
import type { Shown } from './command-dialogs';
import './commands.css';

const loadDialogs = () => import('./command-dialogs').then((module) => module.CommandDialogs);

const isTyping = (target: EventTarget | null) =>
  target instanceof HTMLElement && (target.isContentEditable || /^(INPUT|TEXTAREA|SELECT)$/.test(target.tagName));

/** Find or do, on Ctrl+K, over everything that one can open or do here; `?` shows the keys. Stands once in the layout. */
export function CommandMenu({ onOpenChange }: { onOpenChange?: (open: boolean) => void }) {
  const [shown, setShown] = useState<Shown>(null);
  useEffect(() => {
    const onKey = (event: KeyboardEvent) => {
      if ((event.ctrlKey || event.metaKey) && !event.altKey && !event.shiftKey && event.key.toLowerCase() === 'k') {
        event.preventDefault();
        setShown((now) => (now === 'menu' ? null : 'menu'));
      } else if (event.key === '?' && !event.ctrlKey && !event.metaKey && !event.altKey && !isTyping(event.target)) {
        event.preventDefault();
        setShown('keys');
      }
    };
    const onAsked = () => setShown('menu');
    window.addEventListener('keydown', onKey);
    window.addEventListener('kelvinleaf:find', onAsked);
    return () => {
      window.removeEventListener('keydown', onKey);
      window.removeEventListener('kelvinleaf:find', onAsked);
    };
  }, []);
  useEffect(() => onOpenChange?.(shown === 'menu'), [shown, onOpenChange]);
  const { part: Dialogs, problem } = useFetched(shown !== null, loadDialogs);
  useEffect(() => {
    if (problem) setShown(null);
  }, [problem]);
  return (
    <>
      {problem ? (
        <div className="fixed inset-x-3 bottom-3 z-50 bg-sheet">
          <ErrorSentence>{problem}</ErrorSentence>
        </div>
      ) : null}
      {Dialogs ? <Dialogs shown={shown} onShown={setShown} /> : null}
    </>
  );
}

/** Opens the command menu from a button anywhere on the page. */
export function openCommandMenu(): void {
  window.dispatchEvent(new Event('kelvinleaf:find'));
}

/** The entry in the page's head: looks like the field it opens. */
export function FindButton() {
  return (
    <button type="button" className="find-button" onClick={openCommandMenu}>
      <span>Find or do</span>
      <kbd>Ctrl K</kbd>
    </button>
  );
}
