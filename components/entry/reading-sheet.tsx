'use client';

import { EditorContent } from '@tiptap/react';
import { useMemo, useState } from 'react';
import type { EntryDto, PersonDto, VersionContentDto } from '@/lib/schemas/entry';
import { readingExtensions } from '@/components/editor/editor-extensions';
import { SheetProvider, type Focus } from '@/components/editor/sheet-context/context';
import { GutterNote } from './gutter-note';
import { ProvenanceColumn } from './provenance/column';
import { AskForm, Questions } from './questions';
import { SheetHead } from './sheet-head';
import { StaticText } from './static-text';
import { useEntryEditor } from './use-entry-editor';
import { peopleOf, useQuestions, useStampsShown } from './use-entry-people';
import { useSheetStore } from './use-sheet-store';

type Props = { entry: EntryDto; version: VersionContentDto; person: PersonDto | null };

const noChange = () => undefined;
const nothingWritten = {};

/** A version as it was bound: the same sheet, read-only, with the values that the version holds. */
export function ReadingSheet({ entry, version, person }: Props) {
  const [focus, setFocus] = useState<Focus | null>(null);
  const traces = useMemo(() => new Map(entry.traces.map((trace) => [trace.id, trace])), [entry.traces]);
  const store = useSheetStore(entry.id, traces, version.values);
  const { questions, changed } = useQuestions(entry.questions);
  const editor = useEntryEditor({
    extensions: readingExtensions,
    doc: version.doc,
    editable: false,
    store,
    label: 'Text of the entry',
    onChange: noChange,
    onFocus: noChange,
  });
  const people = useMemo(() => peopleOf(entry, person), [entry, person]);
  useStampsShown(editor, version.stamps, nothingWritten, people, '', entry.workDate);

  /** A block becomes the subject when it is clicked, or when words in it are marked. Values and traces speak for themselves. */
  const choose = (event: React.MouseEvent) => {
    const target = event.target as HTMLElement;
    if (target.closest('.value, .trace, .question, button, a, input')) return;
    let block = target.closest<HTMLElement>('[data-id]');
    while (block?.parentElement?.closest('[data-id]')) block = block.parentElement.closest<HTMLElement>('[data-id]');
    const id = block?.dataset.id;
    if (!id || !block) return;
    const marked = window.getSelection()?.toString().trim() ?? '';
    setFocus({ kind: 'block', id, blockId: id, quote: (marked || block.textContent || '').slice(0, 300) });
  };

  return (
    <SheetProvider value={{ entryId: entry.id, mode: 'read', person, store, traces, focus, setFocus }}>
      <div className="entry">
        <article className="sheet" aria-label={`${entry.notebook.code} leaf ${entry.leaf}`}>
          <SheetHead entry={entry} title={version.title} version={version} onTitle={null} />
          {/* The mouse chooses a block here; the keyboard does through the values, the traces and the list in the form to ask. */}
          {}
          <div onClick={choose}>
            <GutterNote stamps={version.stamps}>
              {editor ? <EditorContent editor={editor} /> : <StaticText doc={version.doc} />}
            </GutterNote>
          </div>
          <Questions editor={editor} questions={questions} onChanged={changed} />
          <Signatures entry={entry} />
        </article>
        <ProvenanceColumn
          entry={entry}
          editor={editor}
          stamps={version.stamps}
          written={nothingWritten}
          names={people.names}
        >
          <AskForm entry={entry} editor={editor} onAsked={changed} />
        </ProvenanceColumn>
      </div>
    </SheetProvider>
  );
}

function Signatures({ entry }: { entry: EntryDto }) {
  if (entry.signatures.length === 0) return null;
  return (
    <section className="signatures" aria-label="Signatures">
      {entry.signatures.map((signature) => (
        <p key={signature.id}>
          <strong>{signature.printedName}</strong>,{' '}
          <time dateTime={signature.signedAt}>{signature.signedAt.slice(0, 19).replace('T', ' ')} UTC</time> (
          {signature.zone}): {signature.meaning}
          {signature.lateReason ? ` Signed late: ${signature.lateReason}` : ''}{' '}
          <span className="figures text-quiet">version {signature.versionDigest.slice(0, 8)}</span>
        </p>
      ))}
    </section>
  );
}
