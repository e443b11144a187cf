import { InputRule, type Editor } from '@tiptap/core';
import { NodeSelection } from '@tiptap/pm/state';
import { ReactNodeViewRenderer } from '@tiptap/react';
import { newBlockId } from '@/lib/document/block-id';
import { equation, equationBlock } from '@/lib/document/nodes/equation';
import { openNode } from '@/components/editor/opening';
import { EquationView } from './view';

export function insertEquation(editor: Editor, tex = ''): boolean {
  return editor.chain().focus().insertContent({ type: 'equation', attrs: { tex } }).run();
}

export function insertEquationBlock(editor: Editor, tex = ''): boolean {
  const id = newBlockId();
  return editor.chain().focus().insertContent({ type: 'equationBlock', attrs: { id, tex } }).run();
}

/** Inline equation; `$…$` makes one. */
export const equationWithView = equation.extend({
  addNodeView: () => ReactNodeViewRenderer(EquationView, { as: 'span' }),
  addInputRules() {
    return [
      new InputRule({
        // Not after a digit or letter and not with a space inside the first sign: `$5 and $6` are prices, not an equation.
        find: /(?<![\w$\\])\$([^\s$](?:[^$\n]*[^\s$\\])?)\$$/,
        handler: ({ state, range, match }) => {
          const tex = match[1];
          if (!tex) return null;
          state.tr.replaceWith(range.from, range.to, this.type.create({ tex }));
        },
      }),
    ];
  },
});

/** Displayed equation; Enter on a chosen one opens its TeX. */
export const equationBlockWithView = equationBlock.extend({
  addNodeView: () => ReactNodeViewRenderer(EquationView),
  addKeyboardShortcuts() {
    return {
      Enter: () => {
        const { selection } = this.editor.state;
        if (!(selection instanceof NodeSelection) || selection.node.type.name !== this.name) return false;
        openNode(this.editor, String(selection.node.attrs.id));
        return true;
      },
    };
  },
});
