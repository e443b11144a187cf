'use client';

import { NodeViewWrapper, type ReactNodeViewProps } from '@tiptap/react';
import { useId, useState } from 'react';
import { useSheet } from '@/components/editor/sheet-context/context';

/** A picture of the entry's own store with its description and caption. */
export function PictureView({ node, editor, selected, updateAttributes }: ReactNodeViewProps) {
  const { mode } = useSheet();
  const [failed, setFailed] = useState(false);
  const writable = mode === 'write' && editor.isEditable;
  const alt = String(node.attrs.alt ?? '');
  const caption = String(node.attrs.caption ?? '');
  const altId = useId();
  const captionId = useId();
  return (
    <NodeViewWrapper as="figure" className={`picture ${selected ? 'chosen' : ''}`} data-id={node.attrs.id ?? undefined}>
      {failed ? (
        <p className="text-error">The picture could not be loaded. It stays in the entry; reload to try again.</p>
      ) : (
        // The image comes from this server's own route; the optimiser would make a second copy of a record.
        // eslint-disable-next-line @next/next/no-img-element -- see above
        <img
          src={`/api/pictures/${encodeURIComponent(String(node.attrs.pictureId))}`}
          alt={alt}
          onError={() => setFailed(true)}
        />
      )}
      {writable ? (
        <figcaption className="picture-fields" contentEditable={false}>
          <label htmlFor={captionId}>caption</label>
          <input
            id={captionId}
            value={caption}
            maxLength={1000}
            onChange={(event) => updateAttributes({ caption: event.target.value })}
          />
          <label htmlFor={altId}>what it shows, for those who cannot see it</label>
          <input
            id={altId}
            value={alt}
            maxLength={1000}
            onChange={(event) => updateAttributes({ alt: event.target.value })}
          />
        </figcaption>
      ) : caption ? (
        <figcaption>{caption}</figcaption>
      ) : null}
    </NodeViewWrapper>
  );
}
