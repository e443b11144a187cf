'use client';

import { useState } from 'react';
import type { BlockStamps } from '@/lib/schemas/entry';

type Note = { top: number; text: string };

/** On the way over the gutter: when the block beside the pointer was received. The keyboard finds the same in the provenance column. */
export function GutterNote({ stamps, children }: { stamps: BlockStamps; children: React.ReactNode }) {
  const [note, setNote] = useState<Note | null>(null);
  const look = (event: React.MouseEvent<HTMLDivElement>) => {
    const box = event.currentTarget.getBoundingClientRect();
    const text = event.currentTarget.querySelector('.entry-text');
    const left = text ? Number.parseFloat(getComputedStyle(text).paddingLeft) : 0;
    if (!text || event.clientX > box.left + left - 8) {
      if (note) setNote(null);
      return;
    }
    for (const block of text.children) {
      const { top, bottom } = block.getBoundingClientRect();
      if (event.clientY < top || event.clientY > bottom) continue;
      const id = block.getAttribute('data-id') ?? block.querySelector('[data-id]')?.getAttribute('data-id') ?? '';
      const stamp = Object.hasOwn(stamps, id) ? stamps[id] : undefined;
      const received = stamp ? stamp.last.received.slice(0, 19).replace('T', ' ') : null;
      setNote({ top: top - box.top, text: received ? `received ${received} UTC` : 'not received yet' });
      return;
    }
    setNote(null);
  };
  return (
    <div className="sheet-body" onMouseMove={look} onMouseLeave={() => setNote(null)}>
      {children}
      {note ? (
        <span className="gutter-note figures" style={{ top: note.top }} aria-hidden="true">
          {note.text}
        </span>
      ) : null}
    </div>
  );
}
