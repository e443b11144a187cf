import 'server-only';
import { digestOf } from '@/lib/integrity/canonical';
import type { NodeJson } from '@/lib/document/json';
import type { BlockStamps } from '@/lib/schemas/entry';
import { sha256 } from '@/server/digest/service';

/** Content of a block as far as a person wrote it: `shown` is the calculation's, not the writer's. */
function blockDigest(block: NodeJson): string {
  return digestOf(JSON.parse(JSON.stringify(block, (key, value) => (key === 'shown' ? undefined : value))), sha256);
}

/**
 * Stamps after a save: a new block gets both times, a changed one a new last time, an unchanged one keeps its own.
 * `written` are the writer's own times per block id; where one is missing the time of receipt stands for it.
 */
export function nextStamps(
  before: BlockStamps,
  blocks: readonly NodeJson[],
  save: { written: Record<string, string>; clockOffsetMs: number; by: string; received: Date },
): BlockStamps {
  const received = save.received.toISOString();
  // A map, since an id such as __proto__ must be a key like any other.
  const after = new Map<string, BlockStamps[string]>();
  for (const block of blocks) {
    const id = block.attrs?.id;
    if (typeof id !== 'string') continue;
    const digest = blockDigest(block);
    const known = Object.hasOwn(before, id) ? before[id] : undefined;
    if (known?.digest === digest) {
      after.set(id, known);
      continue;
    }
    const at = Object.hasOwn(save.written, id) ? save.written[id] : received;
    const stamp = { at, received, by: save.by, offsetMs: Math.round(save.clockOffsetMs) };
    after.set(id, { first: known?.first ?? stamp, last: stamp, digest });
  }
  return Object.fromEntries(after);
}
