'use client';

import type { Editor } from '@tiptap/core';
import { EditorContent } from '@tiptap/react';
import { useRouter } from 'next/navigation';
import { useCallback, useEffect, useMemo, useRef, useState } from 'react';
import type { DocumentJson } from '@/lib/document/json';
import type { DraftDto, EntryDto, PersonDto, TraceDto } from '@/lib/schemas/entry';
import { usePageCommands, type Command } from '@/components/commands/command-context';
import { editorActions } from '@/components/editor/actions';
import { writingExtensions } from '@/components/editor/editor-extensions';
import { textOfEditor } from '@/components/editor/editor-text';
import { SheetProvider, type Focus } from '@/components/editor/sheet-context/context';
import { Toolbar } from '@/components/editor/toolbar';
import { useDraft } from '@/components/hooks/use-draft';
import { ErrorSentence } from '@/components/ui/sentence';
import { useFetched } from '@/components/ui/use-fetched';
import { AttachmentList } from './attachment-list';
import { Compare } from './compare';
import { GutterNote } from './gutter-note';
import { peopleOf } from './people';
import { ProvenanceColumn } from './provenance/column';
import { SaveLine } from './save-line';
import { SheetHead } from './sheet-head';
import { useAttachments, type SendFile } from './use-attachments';
import { replaceText, useEntryEditor } from './use-entry-editor';
import { useQuestions } from './use-questions';
import { useSheetStore } from './use-sheet-store';
import { useStampsShown } from './use-stamps-shown';
import { WrittenQuestions } from './written-questions';

type Props = {
  entry: EntryDto;
  draft: DraftDto;
  /** Equations of the draft as the server has typeset them, by `equationKey`. */
  equations: Record<string, string>;
  person: PersonDto;
  build: string;
};

const loadRenewDialog = () => import('./renew-dialog').then((module) => module.RenewDialog);

/** Hashing and sending are fetched with the first file. */
const send: SendFile = async (...args) => (await import('@/components/trace/send-file')).sendFile(...args);

/** An entry as it is written: editor, saving, files, provenance. */
export function WritingSheet({ entry, draft: first, equations, person, build }: Props) {
  const [title, setTitle] = useState(first.title);
  const [focus, setFocus] = useState<Focus | null>(null);
  const [comparing, setComparing] = useState(false);
  const [renewing, setRenewing] = useState(false);
  const { part: Renew, problem: renewProblem } = useFetched(renewing, loadRenewDialog);
  const [traces, setTraces] = useState(() => new Map(entry.traces.map((trace) => [trace.id, trace])));
  const { questions, changed: questionChanged } = useQuestions(entry.questions);
  const store = useSheetStore(entry.id, traces);
  const held = useRef<Editor | null>(null);

  const draft = useDraft({
    draft: first,
    person,
    build,
    onText: (nextTitle, doc) => {
      setTitle(nextTitle);
      if (held.current) {
        replaceText(held.current, doc);
        store.setDocument(held.current.state.doc);
      }
    },
  });
  const onTrace = useCallback((trace: TraceDto) => setTraces((all) => new Map(all).set(trace.id, trace)), []);
  const editorNow = useCallback(() => held.current, []);
  const { attachments, host, inputs, cancel, retry, pause, resume } = useAttachments({
    entryId: entry.id,
    editor: editorNow,
    send,
    onTrace,
  });
  const hostNow = useRef(host);
  hostNow.current = host;
  const [extensions] = useState(() =>
    writingExtensions({
      choose: (kind) => hostNow.current.choose(kind),
      attach: (...args) => hostNow.current.attach(...args),
    }),
  );
  const titleNow = useRef(title);
  titleNow.current = title;
  const editor = useEntryEditor({
    extensions,
    doc: first.doc,
    editable: true,
    store,
    label: `Text of the entry. Escape, then Tab leaves it.`,
    onChange: (doc, changed) => draft.change(titleNow.current, doc, changed),
    onFocus: setFocus,
  });
  useEffect(() => {
    held.current = editor;
    const { doc } = draft.text();
    // A text restored before the editor stood is shown now.
    if (editor && doc !== first.doc) replaceText(editor, doc);
    // eslint-disable-next-line react-hooks/exhaustive-deps -- once per editor; later texts come through onText
  }, [editor]);

  const people = useMemo(() => peopleOf(entry, person), [entry, person]);
  useStampsShown(editor, draft.stamps, draft.written, people, person.initials, entry.workDate);

  const text = useMemo(() => textOfEditor(editor), [editor]);
  const { cutVersion } = draft;
  const router = useRouter();
  // A signature binds a version: it is cut of the newest text, and where that fails the reason stands beside the text.
  const sign = async () => {
    if (await cutVersion(null)) router.push(`/entries/${entry.id}/sign`);
  };
  useEffect(() => {
    const onKey = (event: KeyboardEvent) => {
      if (!(event.ctrlKey || event.metaKey) || event.shiftKey || event.altKey || event.key.toLowerCase() !== 's')
        return;
      event.preventDefault();
      void cutVersion(null);
    };
    window.addEventListener('keydown', onKey);
    return () => window.removeEventListener('keydown', onKey);
  }, [cutVersion]);

  const commands = useMemo<Command[]>(
    () => [
      ...(editor
        ? editorActions(host).map((action) => ({
            key: action.key,
            title: action.title,
            detail: action.about,
            ...(action.keys ? { keys: action.keys } : {}),
            run: () => action.run(editor),
          }))
        : []),
      {
        key: 'version',
        title: 'Cut a version',
        detail: 'of this entry now',
        keys: 'Ctrl+S',
        run: () => void cutVersion(null),
      },
    ],
    [editor, host, cutVersion],
  );
  usePageCommands(commands);

  const traceInput = (kind: 'trace' | 'picture', accept: string) => (
    <input
      ref={(element) => {
        inputs.current[kind] = element;
      }}
      type="file"
      hidden
      multiple
      accept={accept}
      aria-hidden="true"
      tabIndex={-1}
      onChange={(event) => {
        host.attach(kind, Array.from(event.target.files ?? []), null);
        event.target.value = '';
      }}
    />
  );
  const resolve = (nextTitle: string, doc: DocumentJson, changed: string[]) => {
    setTitle(nextTitle);
    setComparing(false);
    if (editor) replaceText(editor, doc);
    draft.resolve(nextTitle, doc, changed);
  };
  const { status, leftOver } = draft;
  const old = leftOver[0];

  return (
    <SheetProvider
      value={{ entryId: entry.id, mode: 'write', person, store, live: store, equations, traces, focus, setFocus }}
    >
      <div className="entry">
        <article className="sheet" aria-label={`${entry.notebook.code} leaf ${entry.leaf}`}>
          <SheetHead
            entry={entry}
            title={title}
            version={entry.head}
            onTitle={(next) => {
              setTitle(next);
              draft.change(next, draft.text().doc, []);
            }}
          />
          <SaveLine draft={draft} onCompare={() => setComparing(true)} onRenew={() => setRenewing(true)} />
          <ErrorSentence>{renewing ? renewProblem : null}</ErrorSentence>
          {editor ? <Toolbar editor={editor} host={host} /> : null}
          {traceInput('trace', '')}
          {traceInput('picture', 'image/png,image/jpeg,image/gif,image/webp')}
          <AttachmentList
            attachments={attachments}
            onCancel={cancel}
            onRetry={retry}
            onPause={pause}
            onResume={resume}
          />
          {comparing && status.kind === 'conflict' ? (
            <Compare
              mine={draft.text()}
              theirs={{
                ...status.current,
                who: status.current.savedBy.name,
                when: status.current.savedAt.slice(0, 19).replace('T', ' ') + ' UTC',
              }}
              onChoose={resolve}
              onLater={() => setComparing(false)}
            />
          ) : null}
          {!comparing && old ? (
            <Compare
              mine={{ title: old.title, doc: old.doc }}
              theirs={{
                ...draft.text(),
                who: 'A window that was closed',
                when: `kept ${old.keptAt.slice(0, 19).replace('T', ' ')} UTC`,
              }}
              onChoose={(nextTitle, doc, changed) => {
                setTitle(nextTitle);
                if (editor) replaceText(editor, doc);
                draft.change(nextTitle, doc, changed);
                draft.dropLeftOver(old);
              }}
              onLater={() => draft.dropLeftOver(old)}
            />
          ) : null}
          <GutterNote stamps={draft.stamps}>
            <EditorContent editor={editor} />
          </GutterNote>
          <WrittenQuestions editor={editor} questions={questions} onChanged={questionChanged} />
        </article>
        <ProvenanceColumn
          entry={entry}
          text={text}
          stamps={draft.stamps}
          written={draft.written}
          names={people.names}
          onSign={entry.may.sign ? () => void sign() : undefined}
        />
      </div>
      {Renew ? <Renew open={renewing} onOpenChange={setRenewing} person={person} onRenewed={draft.resume} /> : null}
    </SheetProvider>
  );
}
