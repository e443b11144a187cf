'use client';

import { useEffect, useId, useRef, useState } from 'react';
import { useFieldFocus } from '@/components/editor/use-field-focus';
import { useResult, useSheet } from '@/components/editor/sheet-context/context';

type Draft = { source: string; unit: string | null; digits: number | null };
type Props = Draft & { id: string; onCommit: (draft: Draft) => void; onLeave: () => void };

/** The line of a value while it is written: Enter or leaving the field commits, Escape goes back. */
export function ValueField({ id, source, unit, digits, onCommit, onLeave }: Props) {
  const { live } = useSheet();
  const [draft, setDraft] = useState<Draft>({ source, unit, digits });
  const result = useResult(id);
  const box = useRef<HTMLSpanElement>(null);
  const line = useRef<HTMLInputElement>(null);
  const done = useRef(false);
  const noteId = useId();

  const ready = useFieldFocus(line);
  useEffect(() => () => live?.setPreview(id, null), [live, id]);

  const finish = (act: () => void) => {
    if (done.current) return;
    done.current = true;
    live?.setPreview(id, null);
    act();
  };
  const typed = draft.source.trim() !== '';
  const problem = typed && result?.state === 'error' ? result.error?.message : null;
  return (
    <span
      ref={box}
      className="value-field"
      onKeyDown={(event) => {
        event.stopPropagation();
        if (event.key === 'Enter') {
          event.preventDefault();
          finish(() => onCommit(draft));
        } else if (event.key === 'Escape') {
          event.preventDefault();
          finish(onLeave);
        }
      }}
      onBlur={(event) => {
        if (ready.current && !box.current?.contains(event.relatedTarget)) finish(() => onCommit(draft));
      }}
    >
      <input
        ref={line}
        className="figures value-line"
        aria-label="Value: symbol = expression"
        aria-describedby={noteId}
        aria-invalid={problem ? true : undefined}
        placeholder="f = 200 kHz exactly"
        spellCheck={false}
        autoComplete="off"
        autoCapitalize="off"
        maxLength={2000}
        value={draft.source}
        size={Math.min(Math.max(draft.source.length + 1, 20), 60)}
        onChange={(event) => {
          setDraft({ ...draft, source: event.target.value });
          live?.setPreview(id, event.target.value.trim() === '' ? null : event.target.value);
        }}
      />
      <span className="value-panel">
        <span id={noteId} role="status" className={problem ? 'text-error' : 'text-quiet'}>
          {problem ??
            (result?.state === 'ok' && typed ? `= ${result.text ?? ''}` : 'Enter keeps it, Escape goes back.')}
        </span>
        <label>
          unit{' '}
          <input
            className="figures"
            size={6}
            maxLength={60}
            placeholder="usual"
            value={draft.unit ?? ''}
            onChange={(event) =>
              setDraft({ ...draft, unit: event.target.value.trim() === '' ? null : event.target.value })
            }
          />
        </label>
        <label>
          digits of the uncertainty{' '}
          <select
            value={draft.digits ?? ''}
            onChange={(event) => setDraft({ ...draft, digits: event.target.value ? Number(event.target.value) : null })}
          >
            <option value="">two</option>
            <option value="1">1</option>
            <option value="2">2</option>
            <option value="3">3</option>
            <option value="4">4</option>
          </select>
        </label>
      </span>
    </span>
  );
}
