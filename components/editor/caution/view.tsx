'use client';

import { NodeViewWrapper, type ReactNodeViewProps } from '@tiptap/react';
import { clockTime } from '@/lib/document/clock-time';
import { useSheet } from '@/components/editor/sheet-context/context';
import { CautionText } from './caution-text';

/** The caution of a cooldown day and who acknowledged it. */
export function CautionView({ node, editor, updateAttributes }: ReactNodeViewProps) {
  const { mode, person } = useSheet();
  const at = node.attrs.acknowledgedAt as string | null;
  const by = node.attrs.acknowledgedBy as string | null;
  const open = mode === 'write' && editor.isEditable && !at && person !== null;
  return (
    <NodeViewWrapper className="caution" data-id={node.attrs.id ?? undefined} role="note" aria-label="Caution">
      <CautionText
        at={at}
        by={by}
        onAcknowledge={
          open
            ? () => updateAttributes({ acknowledgedAt: clockTime(new Date()), acknowledgedBy: person.name })
            : undefined
        }
      />
    </NodeViewWrapper>
  );
}
