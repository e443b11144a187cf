import type { Editor } from '@tiptap/core';
import type { Node as ProseMirrorNode } from '@tiptap/pm/model';
import type { SheetText } from '@/components/entry/sheet-text';

/** The text as it stands in the editor at each question; empty before the editor stands. */
export function textOfEditor(editor: Editor | null): SheetText {
  const blocks = (): ProseMirrorNode[] => (editor ? [...editor.state.doc.children] : []);
  const nodeById = (id: string) => {
    for (const block of blocks()) {
      if (block.attrs.id === id) return { node: block, block };
      let inner: ProseMirrorNode | null = null;
      block.descendants((node) => {
        if (node.attrs.id === id) inner = node;
        return inner === null && !node.isAtom;
      });
      if (inner) return { node: inner as ProseMirrorNode, block };
    }
    return null;
  };
  return {
    blocks: () =>
      blocks().flatMap(({ attrs, type, textContent }) =>
        typeof attrs.id === 'string'
          ? [{ id: attrs.id, words: type.name === 'trace' ? `trace ${String(attrs.handle)}` : textContent }]
          : [],
      ),
    attributes: (id) => nodeById(id)?.node.attrs ?? null,
    blockOf: (id) => {
      const found: unknown = nodeById(id)?.block.attrs.id;
      return typeof found === 'string' ? found : null;
    },
    traceNamed: (handle) => {
      const block = blocks().find(({ type, attrs }) => type.name === 'trace' && attrs.handle === handle);
      return block ? String(block.attrs.id) : null;
    },
  };
}
