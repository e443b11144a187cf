import { diffArrays } from 'diff';
import type { DocumentJson, NodeJson } from './json';
import { sameDocument } from './same';
import { documentText } from './text';
import { valueLine } from './value-line';

export type TextPart = { text: string; change: 'same' | 'added' | 'removed' };

/** A fact of a block that is not its text, before and after; null where it was or is not there. */
export type FactChange = { about: string; before: string | null; after: string | null };

export type BlockDifference = {
  id: string;
  type: string;
  change: 'same' | 'added' | 'removed' | 'changed';
  moved: boolean;
  /** Text of the block with its changes by word; of an unchanged block one part. */
  parts: TextPart[];
  values: FactChange[];
  /** Trace: file, handle, spans, settings. Other blocks: level, checked lines, acknowledgement. */
  facts: FactChange[];
};

export type DocumentDifference = {
  blocks: BlockDifference[];
  counts: { added: number; removed: number; changed: number; moved: number };
};

const idOf = (block: NodeJson, index: number) => (typeof block.attrs?.id === 'string' ? block.attrs.id : `#${index}`);

/** Words, numbers with their sign, point and uncertainty (`-0.620(3)`), spaces and signs: a number changes as a whole. */
function wordsOf(text: string): string[] {
  return text.match(/\s+|[-+−]?\d+(?:[.,]\d+)*(?:\(\d+\))?(?:[eE][-+]?\d+)?|[\p{L}\p{M}\p{N}_]+|[^\s]/gu) ?? [];
}

export function textDifference(before: string, after: string): TextPart[] {
  if (before === after) return before === '' ? [] : [{ text: before, change: 'same' }];
  const changes = diffArrays(wordsOf(before), wordsOf(after), { timeout: 500 });
  if (!changes) {
    const whole: TextPart[] = [
      { text: before, change: 'removed' },
      { text: after, change: 'added' },
    ];
    return whole.filter((part) => part.text !== '');
  }
  return changes.map((part) => ({
    text: part.value.join(''),
    change: part.added ? 'added' : part.removed ? 'removed' : 'same',
  }));
}

function nodesOf(root: NodeJson | undefined, type: string): NodeJson[] {
  const found: NodeJson[] = [];
  const work = root ? [root] : [];
  for (let node = work.pop(); node !== undefined; node = work.pop()) {
    if (node.type === type) found.push(node);
    for (let i = (node.content ?? []).length - 1; i >= 0; i -= 1) work.push(node.content![i]!);
  }
  return found;
}

function changesOf(before: Map<string, string>, after: Map<string, string>): FactChange[] {
  const changes: FactChange[] = [];
  for (const [about, old] of before) {
    const now = after.get(about) ?? null;
    if (old !== now) changes.push({ about, before: old, after: now });
  }
  for (const [about, now] of after) if (!before.has(about)) changes.push({ about, before: null, after: now });
  return changes;
}

/** Values by id: the line as typed and its result; a change of either is one line of the difference. */
function valueChanges(before: NodeJson | undefined, after: NodeJson | undefined): FactChange[] {
  const read = (root: NodeJson | undefined) =>
    new Map(
      nodesOf(root, 'value').map((node) => {
        const source = String(node.attrs?.source ?? '');
        const shown = valueLine('', node.attrs?.shown);
        const fixed = [node.attrs?.unit, node.attrs?.digits && `${String(node.attrs.digits)} digits`].filter(Boolean);
        const line = `${source}${shown ? ` → ${shown}` : ''}${fixed.length ? ` (${fixed.join(', ')})` : ''}`;
        return [String(node.attrs?.id ?? ''), { name: source.split('=')[0]?.trim() || 'value', line }] as const;
      }),
    );
  const old = read(before);
  const now = read(after);
  const changes: FactChange[] = [];
  for (const [id, was] of old) {
    const is = now.get(id);
    if (is?.line !== was.line) changes.push({ about: is?.name ?? was.name, before: was.line, after: is?.line ?? null });
  }
  for (const [id, is] of now) if (!old.has(id)) changes.push({ about: is.name, before: null, after: is.line });
  return changes;
}

const plain = (value: unknown): string => {
  if (value === null || value === undefined) return 'not stated';
  if (typeof value === 'object' && 'text' in value && 'source' in value) {
    return `${String(value.text)}${value.source ? `, ${String(value.source)}` : ''}`;
  }
  return typeof value === 'object' ? JSON.stringify(value) : String(value);
};

function record(value: unknown): Record<string, unknown> {
  return typeof value === 'object' && value !== null && !Array.isArray(value) ? (value as Record<string, unknown>) : {};
}

function traceFacts(node: NodeJson): Map<string, string> {
  const facts = new Map<string, string>();
  const attrs = node.attrs ?? {};
  facts.set('file', plain(attrs.traceId));
  facts.set('handle', plain(attrs.handle));
  const spans = Array.isArray(attrs.spans) ? attrs.spans : [];
  for (const span of spans.map(record)) {
    const intervals = Array.isArray(span.intervals) ? span.intervals : [];
    const ends = intervals.map((pair: unknown) => (Array.isArray(pair) ? `${pair[0]} to ${pair[1]}` : '')).join('; ');
    facts.set(`span ${plain(span.name)}`, `${plain(span.axis)}: ${ends}`);
  }
  const settings = record(attrs.settings);
  for (const [key, value] of Object.entries(settings)) {
    if (key === 'columns' && Array.isArray(value)) {
      value.map(record).forEach((column, index) => {
        for (const part of ['symbol', 'unit', 'gain', 'offset']) {
          facts.set(`column ${index + 1} (${plain(column.name)}), ${part}`, plain(column[part]));
        }
      });
    } else if (typeof value === 'object' && value !== null) {
      for (const [part, inner] of Object.entries(value)) facts.set(`${key}, ${part}`, plain(inner));
    } else facts.set(key, plain(value));
  }
  return facts;
}

function blockFacts(node: NodeJson | undefined): Map<string, string> {
  if (!node) return new Map();
  const attrs = node.attrs ?? {};
  if (node.type === 'trace') return traceFacts(node);
  const facts = new Map<string, string>();
  if (node.type === 'heading') facts.set('level', plain(attrs.level));
  if (node.type === 'picture') {
    facts.set('picture', plain(attrs.pictureId));
  }
  if (node.type === 'caution') {
    const by = attrs.acknowledgedBy;
    facts.set('acknowledged', by ? `${plain(attrs.acknowledgedAt)}, ${plain(by)}` : 'not acknowledged');
  }
  if (node.type === 'logLine') facts.set('time', plain(attrs.at));
  const lines = nodesOf(node, 'taskItem');
  lines.forEach((line, index) => {
    const name = documentText(line).split('\n')[0] || `line ${index + 1}`;
    facts.set(`“${name}”`, line.attrs?.checked === true ? 'done' : 'open');
  });
  return facts;
}

/** Ids whose relative order did not change: a longest increasing run, found by patience sorting. */
function steadyIds(before: string[], after: string[]): Set<string> {
  const placeBefore = new Map(before.map((id, index) => [id, index]));
  const common = after.filter((id) => placeBefore.has(id));
  const tails: number[] = [];
  const previous: number[] = [];
  const places = common.map((id) => placeBefore.get(id)!);
  places.forEach((place, index) => {
    let low = 0;
    let high = tails.length;
    while (low < high) {
      const middle = (low + high) >> 1;
      if (places[tails[middle]!]! < place) low = middle + 1;
      else high = middle;
    }
    previous[index] = low > 0 ? tails[low - 1]! : -1;
    tails[low] = index;
  });
  const steady = new Set<string>();
  for (let at = tails[tails.length - 1] ?? -1; at >= 0; at = previous[at]!) steady.add(common[at]!);
  return steady;
}

/**
 * What changed from `before` to `after`, block by block in the order of `after`; removed blocks stand where they were.
 * Blocks are matched by id, their text is compared by word, values by id, traces by file, handle, spans and settings.
 */
export function documentDifference(before: DocumentJson, after: DocumentJson): DocumentDifference {
  const old = (before.content ?? []).map((block, index) => ({ id: idOf(block, index), block }));
  const now = (after.content ?? []).map((block, index) => ({ id: idOf(block, index), block }));
  const oldById = new Map(old.map((item) => [item.id, item.block]));
  const nowIds = new Set(now.map((item) => item.id));
  const steady = steadyIds(
    old.map((item) => item.id),
    now.map((item) => item.id),
  );
  const removedAfter = new Map<string | null, BlockDifference[]>();
  let anchor: string | null = null;
  for (const { id, block } of old) {
    if (nowIds.has(id)) {
      if (steady.has(id)) anchor = id;
      continue;
    }
    const entry = compareBlock(id, block, undefined, false);
    removedAfter.set(anchor, [...(removedAfter.get(anchor) ?? []), entry]);
  }
  const blocks: BlockDifference[] = [...(removedAfter.get(null) ?? [])];
  for (const { id, block } of now) {
    const was = oldById.get(id);
    blocks.push(compareBlock(id, was, block, was !== undefined && !steady.has(id)));
    blocks.push(...(removedAfter.get(id) ?? []));
  }
  const count = (change: BlockDifference['change']) => blocks.filter((block) => block.change === change).length;
  return {
    blocks,
    counts: {
      added: count('added'),
      removed: count('removed'),
      changed: count('changed'),
      moved: blocks.filter((block) => block.moved).length,
    },
  };
}

function compareBlock(
  id: string,
  was: NodeJson | undefined,
  is: NodeJson | undefined,
  moved: boolean,
): BlockDifference {
  const type = (is ?? was)!.type;
  const oldText = was ? documentText(was) : '';
  const newText = is ? documentText(is) : '';
  if (was && is && sameDocument(was, is)) {
    return { id, type, change: 'same', moved, parts: textDifference(oldText, newText), values: [], facts: [] };
  }
  return {
    id,
    type,
    change: !was ? 'added' : !is ? 'removed' : 'changed',
    moved,
    parts: textDifference(oldText, newText),
    values: valueChanges(was, is),
    facts: was && is ? changesOf(blockFacts(was), blockFacts(is)) : [],
  };
}
