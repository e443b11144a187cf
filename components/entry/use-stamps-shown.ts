'use client';

import type { Editor } from '@tiptap/core';
import { useEffect } from 'react';
import type { BlockStamps } from '@/lib/schemas/entry';
import { showStamps } from '@/components/editor/stamps';
import type { People } from './people';

const toMinutes = (written: Record<string, string>) =>
  Object.entries(written)
    .map(([id, at]) => `${id} ${at.slice(0, 16)}`)
    .join();

/** Keeps the gutter in step with the stamps; seconds do not show there, so they do not redraw it. */
export function useStampsShown(
  editor: Editor | null,
  stamps: BlockStamps,
  written: Record<string, string>,
  people: People,
  own: string,
  workDate: string,
): void {
  const fresh = toMinutes(written);
  useEffect(() => {
    if (!editor || editor.isDestroyed) return;
    showStamps(editor, { stamps, written, initials: people.initials, own, workDate });
    // eslint-disable-next-line react-hooks/exhaustive-deps -- `fresh` stands for `written` by the minute
  }, [editor, stamps, fresh, people, own, workDate]);
}
