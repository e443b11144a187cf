'use client';

import { useId, type ReactNode } from 'react';
import { useSheet } from '@/components/editor/sheet-context/context';

type Props = {
  id: string;
  /** Symbol and result, or the line where there is none. */
  words: string;
  /** Why the version holds no result. */
  problem: string | null;
  children: ReactNode;
};

/** A value as a version has bound it; choosing it shows where it comes from. */
export function ReadingValue({ id, words, problem, children }: Props) {
  const { focus, setFocus } = useSheet();
  const problemId = useId();
  const choose = () => setFocus({ kind: 'value', id, blockId: null, quote: words });
  return (
    <span
      className={`value ${problem ? 'value-error' : ''} ${focus?.id === id ? 'value-chosen' : ''}`}
      data-id={id}
      role="button"
      tabIndex={0}
      aria-label={`value ${words}${problem ? `, in error: ${problem}` : ''}`}
      aria-describedby={problem ? problemId : undefined}
      onClick={choose}
      onKeyDown={(event) => {
        if (event.key !== 'Enter' && event.key !== ' ') return;
        event.preventDefault();
        choose();
      }}
    >
      {children}
      {problem ? (
        <span id={problemId} className="value-problem">
          {problem}
        </span>
      ) : null}
    </span>
  );
}
