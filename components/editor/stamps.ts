import { Extension, type Editor } from '@tiptap/core';
import type { Node as ProseMirrorNode } from '@tiptap/pm/model';
import { Plugin, PluginKey } from '@tiptap/pm/state';
import { Decoration, DecorationSet } from '@tiptap/pm/view';
import type { BlockStamps } from '@/lib/schemas/entry';

export type StampState = {
  stamps: BlockStamps;
  /** Written here and not stamped by the server yet. */
  written: Record<string, string>;
  /** Initials by person id, and those of who writes now. */
  initials: Record<string, string>;
  own: string;
  workDate: string;
};

const key = new PluginKey<{ state: StampState; set: DecorationSet }>('stamps');
const empty: StampState = { stamps: {}, written: {}, initials: {}, own: '', workDate: '' };

/** `09:14`, with the date before it where it is not the day of the work. Wall-clock time of whoever wrote it. */
function timeIn(at: string, workDate: string): string {
  const day = at.slice(0, 10);
  return `${day === workDate || workDate === '' ? '' : `${day.slice(5)} `}${at.slice(11, 16)}`;
}

/** What the gutter says of a block: first written, and in a second line last changed where minute or hand differ. */
export function gutterText(id: string, state: StampState): string {
  const stamp = state.stamps[id];
  const fresh = state.written[id];
  const line = (at: string, who: string) => `${timeIn(at, state.workDate)} ${who}`.trim();
  const first = stamp
    ? line(stamp.first.at, state.initials[stamp.first.by] ?? '')
    : fresh
      ? line(fresh, state.own)
      : '';
  const last = fresh ? line(fresh, state.own) : stamp ? line(stamp.last.at, state.initials[stamp.last.by] ?? '') : '';
  return last === '' || last === first ? first : `${first}\n${last}`;
}

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
