'use client';

import type { Editor, Extensions } from '@tiptap/core';
import { NodeSelection, Selection } from '@tiptap/pm/state';
import type { Node as ProseMirrorNode } from '@tiptap/pm/model';
import { useEditor } from '@tiptap/react';
import { useEffect, useRef } from 'react';
import type { DocumentJson, NodeJson } from '@/lib/document/json';
import type { Focus } from '@/components/editor/sheet-context/context';
import type { SheetStore } from '@/components/editor/sheet-context/sheet-store';

const jsonOfBlock = new WeakMap<ProseMirrorNode, NodeJson>();

/** The document as JSON; blocks that did not change are the same objects as the last time. */
export function documentJson(doc: ProseMirrorNode): DocumentJson {
  const content: NodeJson[] = [];
  doc.forEach((block) => {
    const known = jsonOfBlock.get(block) ?? (block.toJSON() as NodeJson);
    jsonOfBlock.set(block, known);
    content.push(known);
  });
  return { type: 'doc', content };
}

/** Ids of the blocks that are new or differ. */
export function changedBlocks(before: ProseMirrorNode, after: ProseMirrorNode): string[] {
  const old = new Map<unknown, ProseMirrorNode>();
  before.forEach((block) => old.set(block.attrs.id, block));
  const changed: string[] = [];
  after.forEach((block) => {
    const was = old.get(block.attrs.id);
    if (was !== block && !(was && was.eq(block)) && typeof block.attrs.id === 'string') changed.push(block.attrs.id);
  });
  return changed;
}

/** Where the cursor stands, for the provenance column. */
export function focusOf(editor: Editor): Focus | null {
  const { selection, doc } = editor.state;
  const block = selection.$from.depth > 0 ? selection.$from.node(1) : selection.$from.nodeAfter;
  const blockId = typeof block?.attrs.id === 'string' ? block.attrs.id : null;
  if (selection instanceof NodeSelection) {
    const { node } = selection;
    const id = String(node.attrs.id ?? '');
    if (node.type.name === 'value') return { kind: 'value', id, blockId, quote: String(node.attrs.source) };
    if (node.type.name === 'trace') return { kind: 'trace', id, blockId: id, quote: String(node.attrs.handle) };
  }
  if (!block || !blockId) return null;
  const marked = selection.empty ? '' : doc.textBetween(selection.from, selection.to, ' ');
  return { kind: 'block', id: blockId, blockId, quote: (marked || block.textContent).slice(0, 300) };
}

/** Writes results into the value nodes as what their author last saw; no step of the undo history. */
export function storeShown(editor: Editor, store: SheetStore): void {
  if (!editor.isEditable || editor.view.composing || !store.settled()) return;
  const { tr, doc } = editor.state;
  doc.descendants((node, position) => {
    if (node.type.name !== 'value') return !node.isAtom;
    const result = store.result(String(node.attrs.id));
    if (!result || result.state === 'pending') return false;
    const shown = result.state === 'ok' ? result.text : null;
    if (node.attrs.shown !== shown) tr.setNodeAttribute(position, 'shown', shown);
    return false;
  });
  if (tr.docChanged) editor.view.dispatch(tr.setMeta('addToHistory', false));
}

type Options = {
  extensions: Extensions;
  doc: DocumentJson;
  editable: boolean;
  store: SheetStore;
  label: string;
  onChange: (doc: DocumentJson, changed: string[]) => void;
  onFocus: (focus: Focus | null) => void;
};

/** The editor of an entry, tied to its sheet's store. Null until it stands in the browser. */
export function useEntryEditor({ extensions, doc, editable, store, label, onChange, onFocus }: Options): Editor | null {
  const told = useRef({ onChange, onFocus });
  told.current = { onChange, onFocus };
  const last = useRef<ProseMirrorNode | null>(null);
  const editor = useEditor({
    extensions,
    content: doc,
    editable,
    immediatelyRender: false,
    // The editor's own style element would break the page's style policy; its rules stand in entry.css.
    injectCSS: false,
    shouldRerenderOnTransaction: false,
    editorProps: {
      attributes: {
        'aria-label': label,
        class: 'entry-text',
        ...(editable ? { role: 'textbox', 'aria-multiline': 'true' } : { role: 'document' }),
      },
    },
    onCreate: ({ editor: created }) => {
      putCursorInText(created);
      last.current = created.state.doc;
      store.setDocument(created.state.doc);
    },
    onUpdate: ({ editor: updated }) => {
      const after = updated.state.doc;
      const changed = last.current ? changedBlocks(last.current, after) : [];
      last.current = after;
      store.setDocument(after);
      told.current.onChange(documentJson(after), changed);
    },
    onSelectionUpdate: ({ editor: moved }) => {
      if (moved.isFocused) told.current.onFocus(focusOf(moved));
    },
  });
  useEffect(() => {
    if (!editor || !editable) return;
    return store.subscribe(() => {
      if (!editor.isDestroyed) storeShown(editor, store);
    });
  }, [editor, editable, store]);
  return editor;
}

/**
 * A text that opens with a caution or a trace would have that block chosen, and the first letter typed after Tab would take its
 * place. The cursor begins in the first line of words instead.
 */
function putCursorInText(editor: Editor): void {
  const { selection, doc, tr } = editor.state;
  if (!(selection instanceof NodeSelection)) return;
  const first = Selection.findFrom(doc.resolve(0), 1, true);
  if (first) editor.view.dispatch(tr.setSelection(first).setMeta('addToHistory', false));
}

/** Puts another text under the editor (restored, merged, taken over) without it counting as typing. */
export function replaceText(editor: Editor, doc: DocumentJson): void {
  editor.commands.setContent(doc, { emitUpdate: false });
  putCursorInText(editor);
}
