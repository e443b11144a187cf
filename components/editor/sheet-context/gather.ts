import type { Node as ProseMirrorNode } from '@tiptap/pm/model';
import { traceNodeSchema, type TraceNodeAttributes } from '@/lib/document/attributes';
import type { CellSource } from '@/lib/expression/contract';

export type Gathered = { cells: CellSource[]; traces: TraceNodeAttributes[] };

const ofBlock = new WeakMap<ProseMirrorNode, Gathered>();

function gatherBlock(block: ProseMirrorNode): Gathered {
  const known = ofBlock.get(block);
  if (known) return known;
  const gathered: Gathered = { cells: [], traces: [] };
  const take = (node: ProseMirrorNode) => {
    if (node.type.name === 'value') {
      const { id, source, unit, digits } = node.attrs as CellSource;
      if (id && source.trim() !== '') gathered.cells.push({ id, source, unit, digits });
    } else if (node.type.name === 'trace') {
      const attributes = traceNodeSchema.safeParse(node.attrs);
      if (attributes.success) gathered.traces.push(attributes.data);
    }
  };
  take(block);
  block.descendants(take);
  // ProseMirror's nodes never change, so what a block held once it holds for ever.
  ofBlock.set(block, gathered);
  return gathered;
}

/** Cells and traces of a document in reading order; only blocks that changed since the last time are walked. */
export function gather(doc: ProseMirrorNode): Gathered {
  const all: Gathered = { cells: [], traces: [] };
  doc.forEach((block) => {
    const { cells, traces } = gatherBlock(block);
    all.cells.push(...cells);
    all.traces.push(...traces);
  });
  return all;
}
