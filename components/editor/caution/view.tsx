'use client';

import { NodeViewWrapper, type ReactNodeViewProps } from '@tiptap/react';
import { useState } from 'react';
import { cautionText } from '@/lib/document/caution-text';
import { clockTime } from '@/lib/document/nodes/log-line';
import { useSheet } from '@/components/editor/sheet-context/context';

/** The caution of a cooldown day and who acknowledged it. */
export function CautionView({ node, editor, updateAttributes }: ReactNodeViewProps) {
  const { mode, person } = useSheet();
  const at = node.attrs.acknowledgedAt as string | null;
  const by = node.attrs.acknowledgedBy as string | null;
  const [whole, setWhole] = useState(at === null);
  const writable = mode === 'write' && editor.isEditable;
  return (
    <NodeViewWrapper className="caution" data-id={node.attrs.id ?? undefined} role="note" aria-label="Caution">
      <p>
        <strong>{cautionText.title}</strong>{' '}
        {whole ? null : `${cautionText.points.map((point) => point.about.toLowerCase()).join(', ')}. `}
        {cautionText.ending}
      </p>
      {whole ? (
        <ul>
          {cautionText.points.map((point) => (
            <li key={point.about}>
              <strong>{point.about}.</strong> {point.text}
            </li>
          ))}
        </ul>
      ) : null}
      <p className="caution-foot">
        {at
          ? `Read and acknowledged ${at.slice(0, 10)} ${at.slice(11, 16)}${by ? `, ${by}` : ''}.`
          : 'Not acknowledged yet.'}{' '}
        {writable && !at && person ? (
          <button
            type="button"
            className="small-press"
            onClick={() => {
              updateAttributes({ acknowledgedAt: clockTime(new Date()), acknowledgedBy: person.name });
              setWhole(false);
            }}
          >
            I have read this
          </button>
        ) : null}
        <button type="button" className="small-press" aria-expanded={whole} onClick={() => setWhole(!whole)}>
          {whole ? 'Shorter' : 'Read it all'}
        </button>
      </p>
    </NodeViewWrapper>
  );
}
