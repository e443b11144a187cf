import { Extension, type Editor } from '@tiptap/core';
import type { Node as ProseMirrorNode } from '@tiptap/pm/model';
import { Plugin, PluginKey } from '@tiptap/pm/state';
import { Decoration, DecorationSet } from '@tiptap/pm/view';
import { gutterText, type StampState } from '@/components/entry/gutter-text';

const key = new PluginKey<{ state: StampState; set: DecorationSet }>('stamps');
const empty: StampState = { stamps: {}, written: {}, initials: {}, own: '', workDate: '' };

function decorate(doc: ProseMirrorNode, state: StampState): DecorationSet {
  const decorations: Decoration[] = [];
  doc.forEach((block, offset) => {
    const id: unknown = block.attrs.id;
    const when = typeof id === 'string' ? gutterText(id, state) : '';
    decorations.push(Decoration.node(offset, offset + block.nodeSize, { 'data-when': when }));
  });
  return DecorationSet.create(doc, decorations);
}

/** Writes each block's time into the gutter, as an attribute that the style sheet shows to the left of the block. */
export const stamps = Extension.create({
  name: 'stamps',
  addProseMirrorPlugins() {
    return [
      new Plugin({
        key,
        state: {
          init: (_config, state) => ({ state: empty, set: decorate(state.doc, empty) }),
          apply: (transaction, value) => {
            const next = transaction.getMeta(key) as StampState | undefined;
            if (!next && !transaction.docChanged) return value;
            const state = next ?? value.state;
            return { state, set: decorate(transaction.doc, state) };
          },
        },
        props: { decorations: (state) => key.getState(state)?.set },
      }),
    ];
  },
});

export function showStamps(editor: Editor, state: StampState): void {
  editor.view.dispatch(editor.state.tr.setMeta(key, state).setMeta('addToHistory', false));
}
