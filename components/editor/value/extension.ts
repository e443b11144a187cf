import type { Editor } from '@tiptap/core';
import { NodeSelection } from '@tiptap/pm/state';
import { ReactNodeViewRenderer } from '@tiptap/react';
import { newBlockId } from '@/lib/document/block-id';
import { value } from '@/lib/document/nodes/value';
import { openNode } from '@/components/editor/opening';
import { ValueView } from './view';

/** Puts an empty value at the cursor and opens it. */
export function insertValue(editor: Editor, source = ''): boolean {
  const id = newBlockId();
  const attrs = { id, source, unit: null, digits: null, shown: null };
  const done = editor.chain().focus().insertContent({ type: 'value', attrs }).run();
  if (done && source === '') openNode(editor, id);
  return done;
}

/** The value node with its view. `Mod-'` inserts one; Enter on a chosen one opens it. */
export const valueWithView = value.extend({
  addNodeView: () => ReactNodeViewRenderer(ValueView, { as: 'span' }),
  addKeyboardShortcuts() {
    return {
      "Mod-'": () => insertValue(this.editor),
      Enter: () => {
        const { selection } = this.editor.state;
        if (!(selection instanceof NodeSelection) || selection.node.type.name !== this.name) return false;
        openNode(this.editor, String(selection.node.attrs.id));
        return true;
      },
    };
  },
});
