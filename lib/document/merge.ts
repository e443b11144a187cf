import { newBlockId } from './block-id';
import { documentDifference } from './difference';
import type { DocumentJson, NodeJson } from './json';
import { freeHandle } from './nodes/identity';

export type Choice = 'mine' | 'theirs' | 'both';

/** A block of which the two texts differ; null where one of them does not have it. */
export type Divergence = { id: string; mine: NodeJson | null; theirs: NodeJson | null };

/** Blocks in which two documents differ, in reading order. */
export function divergences(theirs: DocumentJson, mine: DocumentJson): Divergence[] {
  const [a, b] = [byId(theirs), byId(mine)];
  return documentDifference(theirs, mine)
    .blocks.filter((block) => block.change !== 'same')
    .map(({ id }) => ({ id, mine: b.get(id) ?? null, theirs: a.get(id) ?? null }));
}

const byId = (doc: DocumentJson) => new Map((doc.content ?? []).map((block) => [String(block.attrs?.id), block]));

/** A copy under ids of its own, so that both texts of a block can stand in one document. */
function asNew(node: NodeJson): NodeJson {
  return {
    ...node,
    ...(node.attrs
      ? { attrs: { ...node.attrs, ...(typeof node.attrs.id === 'string' ? { id: newBlockId() } : {}) } }
      : {}),
    ...(node.content ? { content: node.content.map(asNew) } : {}),
  };
}

/**
 * One document out of two, block by block as chosen; where nothing was chosen both stand, theirs first. A block that
 * only one of the two has is kept unless the other's side was chosen for it. `changed` are the ids that differ from
 * `theirs`, which is the text that the server holds.
 */
export function mergeDocuments(
  theirs: DocumentJson,
  mine: DocumentJson,
  choices: ReadonlyMap<string, Choice>,
): { doc: DocumentJson; changed: string[] } {
  const [a, b] = [byId(theirs), byId(mine)];
  const content: NodeJson[] = [];
  for (const { id, change } of documentDifference(theirs, mine).blocks) {
    const [their, my] = [a.get(id), b.get(id)];
    if (change === 'same' && my) {
      content.push(my);
      continue;
    }
    const choice = choices.get(id) ?? 'both';
    if (their && choice !== 'mine') content.push(their);
    if (my && choice !== 'theirs') content.push(their && choice === 'both' ? asNew(my) : my);
  }
  if (content.length === 0) content.push({ type: 'paragraph', attrs: { id: newBlockId() } });
  const handles = new Set<string>();
  const settled = content.map((block) => {
    if (block.type !== 'trace') return block;
    const handle = String(block.attrs?.handle);
    const own = handles.has(handle) ? freeHandle('t', new Set([...handles, ...namesOf(content)])) : handle;
    handles.add(own);
    return own === handle ? block : { ...block, attrs: { ...block.attrs, handle: own } };
  });
  const changed = settled
    .filter((block) => a.get(String(block.attrs?.id)) !== block)
    .map((block) => String(block.attrs?.id));
  return { doc: { type: 'doc', content: settled }, changed };
}

const namesOf = (blocks: NodeJson[]) =>
  blocks.filter((block) => block.type === 'trace').map((block) => String(block.attrs?.handle));
