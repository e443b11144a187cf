/** The editor's JSON, as ProseMirror writes it. */
export type MarkJson = { type: string; attrs?: Record<string, unknown> };
export type NodeJson = {
  type: string;
  attrs?: Record<string, unknown>;
  content?: NodeJson[];
  marks?: MarkJson[];
  text?: string;
};
export type DocumentJson = NodeJson & { type: 'doc' };

/** Calls `visit` for every node in reading order, with the id of the top-level block that holds it. */
export function walkDocument(doc: NodeJson, visit: (node: NodeJson, blockId: string | null) => void): void {
  const walk = (node: NodeJson, blockId: string | null) => {
    visit(node, blockId);
    for (const child of node.content ?? []) walk(child, blockId);
  };
  for (const block of doc.content ?? []) {
    walk(block, typeof block.attrs?.id === 'string' ? block.attrs.id : null);
  }
}
