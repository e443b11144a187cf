'use client';

import { NodeViewWrapper, type ReactNodeViewProps } from '@tiptap/react';
import { useId } from 'react';
import { valueLine } from '@/lib/document/value-line';
import { useOpening } from '@/components/editor/opening';
import { useResult, useSheet } from '@/components/editor/sheet-context/context';
import { ValueField } from './value-field';
import { ValueText } from './value-text';

/** A value in the text: symbol and result, underlined; opens in place where the entry may be written. */
export function ValueView({ node, editor, getPos, selected, updateAttributes, deleteNode }: ReactNodeViewProps) {
  const id = String(node.attrs.id ?? '');
  const source = String(node.attrs.source ?? '');
  const result = useResult(id);
  const { mode, focus, setFocus } = useSheet();
  const [open, setOpen] = useOpening(editor, id);
  const problemId = useId();
  const writable = mode === 'write' && editor.isEditable;

  const leave = () => {
    setOpen(false);
    const position = getPos();
    if (position !== undefined) editor.commands.focus(position + 1);
  };

  if (open && writable) {
    return (
      <NodeViewWrapper as="span" className="value value-open" data-id={id}>
        <ValueField
          id={id}
          source={source}
          unit={(node.attrs.unit as string | null) ?? null}
          digits={(node.attrs.digits as number | null) ?? null}
          onCommit={(next) => {
            if (next.source.trim() === '') {
              deleteNode();
              editor.commands.focus();
              return;
            }
            const changed =
              next.source !== source || next.unit !== node.attrs.unit || next.digits !== node.attrs.digits;
            if (changed) updateAttributes({ ...next, shown: null });
            leave();
          }}
          onLeave={() => {
            if (source.trim() === '') deleteNode();
            leave();
          }}
        />
      </NodeViewWrapper>
    );
  }

  const shown = result?.state === 'ok' ? result.text : result ? null : (node.attrs.shown as string | null);
  const symbol = result?.symbol ?? null;
  const error = result?.state === 'error' ? result.error : null;
  const words = error ? source : valueLine(source, shown);
  const choose = () => setFocus({ kind: 'value', id, blockId: null, quote: words });
  return (
    <NodeViewWrapper
      as="span"
      className={`value ${error ? 'value-error' : ''} ${selected || focus?.id === id ? 'value-chosen' : ''}`}
      data-id={id}
      role="button"
      tabIndex={writable ? -1 : 0}
      aria-label={`value ${words}${error ? `, in error: ${error.message}` : ''}`}
      aria-describedby={error ? problemId : undefined}
      onClick={choose}
      onDoubleClick={() => writable && setOpen(true)}
      onKeyDown={(event: React.KeyboardEvent) => {
        if (event.key !== 'Enter' && event.key !== ' ') return;
        event.preventDefault();
        choose();
      }}
    >
      <ValueText source={source} shown={error ? null : shown} symbol={symbol} />
      {result?.state === 'pending' ? <span className="value-pending"> calculating</span> : null}
      {error ? (
        <span id={problemId} className="value-problem">
          {error.message}
        </span>
      ) : null}
    </NodeViewWrapper>
  );
}
