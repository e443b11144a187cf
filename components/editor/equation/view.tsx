'use client';

import { NodeViewWrapper, type ReactNodeViewProps } from '@tiptap/react';
import { useId, useRef, useState } from 'react';
import { useOpening } from '@/components/editor/opening';
import { useFieldFocus } from '@/components/editor/use-field-focus';
import { useSheet } from '@/components/editor/sheet-context/context';
import { TypesetHere } from './typeset-here';

/** Equation in the line or on its own; its TeX opens in place. */
export function EquationView({ node, editor, getPos, selected, updateAttributes, deleteNode }: ReactNodeViewProps) {
  const display = node.type.name === 'equationBlock';
  const tex = String(node.attrs.tex ?? '');
  const { mode } = useSheet();
  const writable = mode === 'write' && editor.isEditable;
  // An inline equation has no id; a new one opens because it is empty.
  const [asked, setAsked] = useOpening(editor, (node.attrs.id as string | null) ?? null);
  const [empty, setEmpty] = useState(tex === '');
  const open = writable && (asked || empty);
  const setOpen = (next: boolean) => {
    setAsked(next);
    setEmpty(next);
  };
  const leave = (next: string) => {
    setOpen(false);
    if (next.trim() === '') deleteNode();
    else if (next !== tex) updateAttributes({ tex: next });
    const position = getPos();
    if (position !== undefined) editor.commands.focus(position + 1);
  };
  return (
    <NodeViewWrapper
      as={display ? 'div' : 'span'}
      className={`${display ? 'equation-block' : 'equation'} ${selected ? 'chosen' : ''}`}
      data-id={node.attrs.id ?? undefined}
      onDoubleClick={() => writable && setOpen(true)}
    >
      {open ? <TexField tex={tex} display={display} onDone={leave} /> : <TypesetHere tex={tex} display={display} />}
      {writable && selected && !open ? (
        <button type="button" className="small-press" onClick={() => setOpen(true)}>
          Edit TeX
        </button>
      ) : null}
    </NodeViewWrapper>
  );
}

function TexField({ tex, display, onDone }: { tex: string; display: boolean; onDone: (tex: string) => void }) {
  const [text, setText] = useState(tex);
  const field = useRef<HTMLTextAreaElement>(null);
  const done = useRef(false);
  const hint = useId();
  const ready = useFieldFocus(field);
  const finish = (next: string) => {
    if (done.current) return;
    done.current = true;
    onDone(next);
  };
  return (
    <span className="tex-field">
      <textarea
        ref={field}
        className="figures"
        aria-label="Equation in TeX"
        aria-describedby={hint}
        rows={display ? 3 : 1}
        cols={display ? 60 : 30}
        maxLength={8000}
        spellCheck={false}
        value={text}
        onChange={(event) => setText(event.target.value)}
        onKeyDown={(event) => {
          event.stopPropagation();
          if (event.key === 'Escape') {
            event.preventDefault();
            finish(tex);
          } else if (event.key === 'Enter' && (!display || event.ctrlKey || event.metaKey)) {
            event.preventDefault();
            finish(text);
          }
        }}
        onBlur={() => {
          if (ready.current) finish(text);
        }}
      />
      <span id={hint} className="text-quiet">
        {display ? 'Ctrl+Enter keeps it, Escape goes back.' : 'Enter keeps it, Escape goes back.'}
      </span>
      {text.trim() ? <TypesetHere tex={text} display={display} /> : null}
    </span>
  );
}
