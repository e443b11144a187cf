import { Extension, type Editor } from '@tiptap/core';
import type { Node as ProseMirrorNode } from '@tiptap/pm/model';
import { Plugin, PluginKey } from '@tiptap/pm/state';
import { Decoration, DecorationSet } from '@tiptap/pm/view';

/** A place below a block where the sheet shows a question; the element is the sheet's own and outlives redrawing. */
export type QuestionSlot = { questionId: string; blockId: string; element: HTMLElement };

const key = new PluginKey<{ slots: QuestionSlot[]; set: DecorationSet }>('question-slots');

function decorate(doc: ProseMirrorNode, slots: QuestionSlot[]): DecorationSet {
  if (slots.length === 0) return DecorationSet.empty;
  const decorations: Decoration[] = [];
  doc.forEach((block, offset) => {
    for (const slot of slots) {
      if (slot.blockId !== block.attrs.id) continue;
      const options = { side: 1, key: `question-${slot.questionId}`, stopEvent: () => true, ignoreSelection: true };
      decorations.push(Decoration.widget(offset + block.nodeSize, () => slot.element, options));
    }
  });
  return DecorationSet.create(doc, decorations);
}

export const questionSlots = Extension.create({
  name: 'questionSlots',
  addProseMirrorPlugins() {
    return [
      new Plugin({
        key,
        state: {
          init: () => ({ slots: [] as QuestionSlot[], set: DecorationSet.empty }),
          apply: (transaction, value) => {
            const next = transaction.getMeta(key) as QuestionSlot[] | undefined;
            if (!next && !transaction.docChanged) return value;
            const slots = next ?? value.slots;
            return { slots, set: decorate(transaction.doc, slots) };
          },
        },
        props: { decorations: (state) => key.getState(state)?.set },
      }),
    ];
  },
});

export function showQuestionSlots(editor: Editor, slots: QuestionSlot[]): void {
  editor.view.dispatch(editor.state.tr.setMeta(key, slots).setMeta('addToHistory', false));
}
