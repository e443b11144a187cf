import type { Editor } from '@tiptap/core';
import { useEffect, useState } from 'react';

/** Which node of an editor is to open for editing: one that was just inserted, or that Enter was pressed on. */
const wanted = new WeakMap<Editor, { id: string | null; listeners: Set<() => void> }>();

function stateOf(editor: Editor) {
  const known = wanted.get(editor);
  if (known) return known;
  const fresh = { id: null as string | null, listeners: new Set<() => void>() };
  wanted.set(editor, fresh);
  return fresh;
}

export function openNode(editor: Editor, id: string): void {
  const state = stateOf(editor);
  state.id = id;
  for (const listener of [...state.listeners]) listener();
}

/** Editing state of a node's view; opens when asked through `openNode`. */
export function useOpening(editor: Editor, id: string | null): [boolean, (open: boolean) => void] {
  const [open, setOpen] = useState(() => editor.isEditable && id !== null && stateOf(editor).id === id);
  useEffect(() => {
    const state = stateOf(editor);
    const look = () => {
      if (id === null || state.id !== id || !editor.isEditable) return;
      state.id = null;
      setOpen(true);
    };
    look();
    state.listeners.add(look);
    return () => {
      state.listeners.delete(look);
    };
  }, [editor, id]);
  return [open, setOpen];
}
