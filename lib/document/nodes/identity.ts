import { Extension } from '@tiptap/core';
import type { Node as ProseMirrorNode } from '@tiptap/pm/model';
import { Plugin, PluginKey, type Transaction } from '@tiptap/pm/state';
import { blockIdSchema } from '@/lib/document/attributes';
import { newBlockId } from '@/lib/document/block-id';

/** Nodes that may stand at the top level of a document, and the inline value. Each carries an `id`. */
export const identifiedTypes = [
  'paragraph',
  'heading',
  'bulletList',
  'orderedList',
  'taskList',
  'table',
  'blockquote',
  'codeBlock',
  'horizontalRule',
  'equationBlock',
  'logLine',
  'caution',
  'trace',
  'picture',
  'value',
] as const;

const identified: ReadonlySet<string> = new Set(identifiedTypes);
const isId = (id: unknown): id is string => blockIdSchema.safeParse(id).success;
export const identityKey = new PluginKey('identity');

/**
 * Gives every top-level block and every value an id, and every trace a handle, that nothing else in the document has.
 * Of two blocks with one id (a copy was pasted, a paragraph split) the one that already stood there keeps it.
 */
export const identity = Extension.create({
  name: 'identity',
  addGlobalAttributes() {
    return [
      {
        types: [...identifiedTypes],
        attributes: {
          id: {
            default: null,
            keepOnSplit: false,
            validate: (value: unknown) => {
              if (value !== null && !isId(value))
                throw new RangeError('attribute “id”: 6 to 32 letters, digits, _ or -');
            },
            parseHTML: (element: HTMLElement) => {
              const id = element.getAttribute('data-id');
              return isId(id) ? id : null;
            },
            renderHTML: (attributes: Record<string, unknown>) =>
              isId(attributes.id) ? { 'data-id': attributes.id } : {},
          },
        },
      },
    ];
  },
  onCreate() {
    const { state, view } = this.editor;
    const settled = this.editor.isEditable ? settleIdentity(state.tr, new Map()) : null;
    if (settled) view.dispatch(settled.setMeta('addToHistory', false));
  },
  addProseMirrorPlugins() {
    return [
      new Plugin({
        key: identityKey,
        appendTransaction: (transactions, before, after) => {
          if (!transactions.some((transaction) => transaction.docChanged)) return null;
          return settleIdentity(after.tr, survivors(before.doc, transactions));
        },
      }),
    ];
  },
});

/** Where blocks of the old document stand now, by id. */
function survivors(before: ProseMirrorNode, transactions: readonly Transaction[]): Map<string, number> {
  const places = new Map<string, number>();
  const note = (node: ProseMirrorNode, place: number) => {
    if (!isId(node.attrs.id)) return;
    let position = place;
    for (const transaction of transactions) position = transaction.mapping.map(position, 1);
    places.set(node.attrs.id, position);
  };
  before.forEach((block, offset) => {
    note(block, offset);
    if (block.isTextblock) block.forEach((child, inner) => note(child, offset + 1 + inner));
  });
  return places;
}

/** Adds the steps that make ids and handles unique; null when nothing is amiss. */
export function settleIdentity(transaction: Transaction, standing: Map<string, number>): Transaction | null {
  const seen = new Map<string, { position: number; standing: boolean }>();
  const rename: number[] = [];
  const handles = new Map<string, number>();
  const rehandle: number[] = [];
  transaction.doc.descendants((node, position, parent) => {
    if (!identified.has(node.type.name)) return true;
    const id: unknown = node.attrs.id;
    const needed = parent === transaction.doc || node.type.name === 'value';
    if (!isId(id)) {
      if (needed) rename.push(position);
    } else {
      const here = standing.get(id) === position;
      const other = seen.get(id);
      if (!other) seen.set(id, { position, standing: here });
      else if (here && !other.standing) {
        rename.push(other.position);
        seen.set(id, { position, standing: true });
      } else rename.push(position);
    }
    if (node.type.name === 'trace') {
      const handle = String(node.attrs.handle);
      if (handles.has(handle)) rehandle.push(position);
      else handles.set(handle, position);
    }
    return !node.isAtom;
  });
  for (const position of rename) transaction.setNodeAttribute(position, 'id', newBlockId());
  for (const position of rehandle) {
    const handle = freeHandle('t', new Set(handles.keys()));
    handles.set(handle, position);
    transaction.setNodeAttribute(position, 'handle', handle);
  }
  return transaction.docChanged ? transaction : null;
}

/** The first of `t1`, `t2`, … that is not taken. */
export function freeHandle(stem: string, taken: ReadonlySet<string>): string {
  for (let n = 1; ; n += 1) if (!taken.has(`${stem}${n}`)) return `${stem}${n}`;
}
