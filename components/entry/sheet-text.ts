import { documentText } from '@/lib/document/text';
import type { DocumentJson, NodeJson } from '@/lib/document/json';
import { walkDocument } from '@/lib/document/json';

/** What the provenance column and the questions ask of the text, whether it is being written or read. */
export type SheetText = {
  /** Top-level blocks in reading order, with what a person knows them by. */
  blocks: () => { id: string; words: string }[];
  /** Attributes of the block or value of this id. */
  attributes: (id: string) => Record<string, unknown> | null;
  /** Id of the top-level block that is or holds the node of this id. */
  blockOf: (id: string) => string | null;
  /** Id of the trace with this handle. */
  traceNamed: (handle: string) => string | null;
};

const idOf = (node: NodeJson) => (typeof node.attrs?.id === 'string' ? node.attrs.id : null);

/** The text of a document that does not change. */
export function textOfDocument(doc: DocumentJson): SheetText {
  const nodes = new Map<string, { attrs: Record<string, unknown>; block: string | null }>();
  const traces = new Map<string, string>();
  walkDocument(doc, (node, block) => {
    const id = idOf(node);
    if (id === null) return;
    nodes.set(id, { attrs: node.attrs ?? {}, block });
    if (node.type === 'trace') traces.set(String(node.attrs?.handle), id);
  });
  return {
    blocks: () =>
      (doc.content ?? []).flatMap((block) => {
        const id = idOf(block);
        if (id === null) return [];
        return [{ id, words: block.type === 'trace' ? `trace ${String(block.attrs?.handle)}` : documentText(block) }];
      }),
    attributes: (id) => nodes.get(id)?.attrs ?? null,
    blockOf: (id) => nodes.get(id)?.block ?? null,
    traceNamed: (handle) => traces.get(handle) ?? null,
  };
}

/** Brings a block or value of the text into sight. */
export function showBlock(id: string): void {
  document.querySelector(`.entry-text [data-id="${CSS.escape(id)}"]`)?.scrollIntoView({ block: 'nearest' });
}
