import type { Editor } from '@tiptap/core';
import { TextSelection } from '@tiptap/pm/state';
import { ReactNodeViewRenderer } from '@tiptap/react';
import { newBlockId } from '@/lib/document/block-id';
import { clockTime } from '@/lib/document/clock-time';
import { logLine } from '@/lib/document/nodes/log-line';
import { LogLineView } from './view';

/** Puts a log line with the present time at the cursor: in place of an empty paragraph, else after the present block. */
export function insertLogLine(editor: Editor, now = new Date()): boolean {
  return editor.commands.command(({ state, tr, dispatch }) => {
    const type = state.schema.nodes.logLine;
    if (!type) return false;
    const line = type.create({ id: newBlockId(), at: clockTime(now) });
    const { $from } = tr.selection;
    const block = $from.depth > 0 ? $from.node(1) : null;
    if (!dispatch) return true;
    let at: number;
    if (block && block.type.name === 'paragraph' && block.content.size === 0) {
      at = $from.before(1);
      tr.replaceWith(at, at + block.nodeSize, line);
    } else {
      at = block ? $from.after(1) : tr.selection.to;
      tr.insert(at, line);
    }
    tr.setSelection(TextSelection.create(tr.doc, at + 1)).scrollIntoView();
    return true;
  });
}

/** The log line with its view. `Mod-;` begins one; Enter begins the next, Enter in an empty one ends the log. */
export const logLineWithView = logLine.extend({
  addNodeView: () => ReactNodeViewRenderer(LogLineView),
  addKeyboardShortcuts() {
    return {
      'Mod-;': () => insertLogLine(this.editor),
      Enter: () => {
        const { selection } = this.editor.state;
        const line = selection.$from.parent;
        if (line.type.name !== this.name || !selection.empty) return false;
        if (line.content.size === 0) return this.editor.commands.setNode('paragraph');
        if (selection.$from.parentOffset < line.content.size) return false;
        return insertLogLine(this.editor);
      },
      Backspace: () => {
        const { selection } = this.editor.state;
        const { $from } = selection;
        if ($from.parent.type.name !== this.name || !selection.empty || $from.parentOffset > 0) return false;
        return this.editor.commands.setNode('paragraph');
      },
    };
  },
});
