'use client';

import { NodeViewContent, NodeViewWrapper, type ReactNodeViewProps } from '@tiptap/react';

/** A log line: the time at which it was begun, then its text. */
export function LogLineView({ node }: ReactNodeViewProps) {
  const at = String(node.attrs.at ?? '');
  return (
    <NodeViewWrapper className="log-line" data-id={node.attrs.id ?? undefined}>
      <time dateTime={at} contentEditable={false} className="figures" title={at}>
        {at.slice(11, 19)}
      </time>
      <NodeViewContent as="div" className="log-text" />
    </NodeViewWrapper>
  );
}
