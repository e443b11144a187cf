import type { Editor, Extensions } from '@tiptap/core';
import { EditorContent } from '@tiptap/react';
import { useEffect, useMemo, useState } from 'react';
import type { DocumentJson } from '@/lib/document/json';
import { evaluateSheet } from '@/lib/expression/evaluate';
import type { TraceDto } from '@/lib/schemas/entry';
import { useEntryEditor } from '@/components/entry/use-entry-editor';
import { SheetProvider, type Focus } from './sheet-context/context';
import { SheetStore } from './sheet-context/sheet-store';

export const person = { id: 'p1', name: 'Tomas Reinholt', initials: 'TR' };

export function testStore(parts: Partial<ConstructorParameters<typeof SheetStore>[0]> = {}): SheetStore {
  return new SheetStore({
    evaluate: evaluateSheet,
    fetchColumn: () => Promise.reject(new Error('no samples in this test')),
    evaluateRemotely: () => Promise.reject(new Error('no server in this test')),
    nextFrame: (run) => {
      const timer = setTimeout(run, 0);
      return () => clearTimeout(timer);
    },
    delay: (run, ms) => {
      const timer = setTimeout(run, ms);
      return () => clearTimeout(timer);
    },
    ...parts,
  });
}

type Props = {
  doc: DocumentJson;
  extensions: Extensions;
  store: SheetStore;
  mode?: 'write' | 'read';
  traces?: TraceDto[];
  onEditor?: (editor: Editor) => void;
  onChange?: (doc: DocumentJson, changed: string[]) => void;
  onFocus?: (focus: Focus | null) => void;
};

const nothing = () => undefined;

/** A sheet with nothing around it: the editor, the store and the context of the views. */
export function TestSheet({ doc, extensions, store, mode = 'write', traces = [], onEditor, onChange, onFocus }: Props) {
  const [focus, setFocus] = useState<Focus | null>(null);
  const files = useMemo(() => new Map(traces.map((trace) => [trace.id, trace])), [traces]);
  const take = (next: Focus | null) => {
    setFocus(next);
    onFocus?.(next);
  };
  const editor = useEntryEditor({
    extensions,
    doc,
    editable: mode === 'write',
    store,
    label: 'Text of the entry',
    onChange: onChange ?? nothing,
    onFocus: take,
  });
  useEffect(() => {
    if (editor) onEditor?.(editor);
  }, [editor, onEditor]);
  useEffect(() => store.setTraces(files.values()), [store, files]);
  return (
    <SheetProvider
      value={{ entryId: 'e1', mode, person, store, live: store, equations: {}, traces: files, focus, setFocus: take }}
    >
      <EditorContent editor={editor} />
    </SheetProvider>
  );
}
