'use client';

import { NodeViewWrapper, type ReactNodeViewProps } from '@tiptap/react';
import type { TraceNodeAttributes } from '@/lib/document/attributes';
import { useSheet, useTrace } from '@/components/editor/sheet-context/context';
import { useDerived } from '@/components/editor/sheet-context/use-derived';
import { TraceFoot } from '@/components/trace/trace-foot';
import { TracePanel } from '@/components/trace/trace-panel';

/** A trace in the text: its plot, and below it handle, file, size and digest. */
export function TraceView({ node, editor, selected, updateAttributes }: ReactNodeViewProps) {
  const attributes = node.attrs as TraceNodeAttributes;
  const file = useTrace(attributes.traceId);
  const { setFocus, focus, mode, live } = useSheet();
  const derived = useDerived(live, attributes.handle);
  const writable = mode === 'write' && editor.isEditable;
  const choose = () => setFocus({ kind: 'trace', id: attributes.id, blockId: attributes.id, quote: attributes.handle });
  return (
    <NodeViewWrapper
      as="section"
      className={`trace ${selected || focus?.id === attributes.id ? 'chosen' : ''}`}
      data-id={attributes.id}
      aria-label={`trace ${attributes.handle}`}
      onClick={choose}
      onFocusCapture={choose}
    >
      {file?.state === 'unreadable' ? <p className="text-error">{file.problem}</p> : null}
      {file?.state === 'parsed' ? (
        <TracePanel
          attributes={attributes}
          file={file}
          derived={derived}
          onAttributes={writable ? (part) => updateAttributes(part) : undefined}
        />
      ) : null}
      <TraceFoot handle={attributes.handle} file={file} />
    </NodeViewWrapper>
  );
}
