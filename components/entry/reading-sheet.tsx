'use client';

import { useCallback, useMemo, useRef, useState, type ReactNode } from 'react';
import type { DerivedColumn } from '@/lib/expression/contract';
import type { EntryDto, PersonDto, VersionContentDto } from '@/lib/schemas/entry';
import { SheetProvider, type Focus, type SheetResults } from '@/components/editor/sheet-context/context';
import { VersionProvider } from '@/components/reading/version-context';
import { GutterNote } from './gutter-note';
import { peopleOf } from './people';
import { ProvenanceColumn } from './provenance/column';
import { AskForm, QuestionsBelow } from './questions';
import { SheetHead } from './sheet-head';
import { textOfDocument } from './sheet-text';
import { useQuestions } from './use-questions';

type Props = {
  entry: EntryDto;
  version: VersionContentDto;
  person: PersonDto;
  /** The version's text, as the server has rendered it. */
  text: ReactNode;
};

const nothingWritten = {};
/** Those of the text come typeset with it; what the provenance column shows is typeset when it is asked for. */
const noEquations = {};

/** A version's results never change. */
function resultsOf(version: VersionContentDto): SheetResults {
  const byId = new Map(version.values.map((value) => [value.id, value]));
  return { subscribe: () => () => undefined, result: (id) => byId.get(id), results: () => version.values };
}

/** A version as it was bound: the same sheet, read-only, with the values that the version holds. */
export function ReadingSheet({ entry, version, person, text: rendered }: Props) {
  const [focus, setFocus] = useState<Focus | null>(null);
  const traces = useMemo(() => new Map(entry.traces.map((trace) => [trace.id, trace])), [entry.traces]);
  const store = useMemo(() => resultsOf(version), [version]);
  const text = useMemo(() => textOfDocument(version.doc), [version.doc]);
  const placed = useMemo(() => new Set(text.blocks().map(({ id }) => id)), [text]);
  const { questions, changed } = useQuestions(entry.questions);
  const people = useMemo(() => peopleOf(entry, person), [entry, person]);

  const made = useRef<Promise<Map<string, DerivedColumn>> | null>(null);
  const columns = useCallback(() => {
    if (!made.current) {
      made.current = import('@/components/reading/recalculate').then(({ recalculateColumns }) =>
        recalculateColumns(version.doc, traces),
      );
      // One that failed is tried again at the next question.
      made.current.catch(() => (made.current = null));
    }
    return made.current;
  }, [version.doc, traces]);

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
    <SheetProvider
      value={{
        entryId: entry.id,
        mode: 'read',
        person,
        store,
        live: null,
        equations: noEquations,
        traces,
        focus,
        setFocus,
      }}
    >
      <VersionProvider value={{ questions, onQuestion: changed, columns }}>
        <div className="entry">
          <article className="sheet" aria-label={`${entry.notebook.code} leaf ${entry.leaf}`}>
            <SheetHead entry={entry} title={version.title} version={version} onTitle={null} />
            {/* The mouse chooses a block here; the keyboard does through the values, the traces and the list in the form to ask. */}
            <div onClick={choose}>
              <GutterNote stamps={version.stamps}>{rendered}</GutterNote>
            </div>
            <QuestionsBelow
              questions={questions.filter(({ blockId }) => blockId === null || !placed.has(blockId))}
              onChanged={changed}
            />
            <Signatures entry={entry} />
          </article>
          <ProvenanceColumn
            entry={entry}
            text={text}
            stamps={version.stamps}
            written={nothingWritten}
            names={people.names}
          >
            <AskForm entry={entry} text={text} onAsked={changed} />
          </ProvenanceColumn>
        </div>
      </VersionProvider>
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
          {signature.lateReason ? (
            <>
              {' '}
              <strong className="text-attention">Late.</strong> {signature.lateReason}
            </>
          ) : null}{' '}
          <span className="text-quiet">
            version <span className="figures">{signature.versionDigest.slice(0, 8)}</span>, attested by the server
          </span>
        </p>
      ))}
    </section>
  );
}
