'use client';

import type { Editor } from '@tiptap/core';
import { useEffect, useMemo, useState } from 'react';
import { createPortal } from 'react-dom';
import type { EntryDto, QuestionDto } from '@/lib/schemas/entry';
import { showQuestionSlots } from '@/components/editor/question-slots';
import { useSheet } from '@/components/editor/sheet-context/context';
import { LongField } from '@/components/ui/field';
import { ErrorSentence } from '@/components/ui/sentence';
import { request } from '@/components/hooks/request';

const moment = (iso: string) => `${iso.slice(0, 10)} ${iso.slice(11, 16)} UTC`;

/** Questions at the place they were asked about; those whose block is gone stand below the text. */
export function Questions({
  editor,
  questions,
  onChanged,
}: {
  editor: Editor | null;
  questions: QuestionDto[];
  onChanged: (question: QuestionDto) => void;
}) {
  const slots = useMemo(() => {
    const placed = new Set<string>();
    editor?.state.doc.forEach((block) => placed.add(String(block.attrs.id)));
    return questions.map((question) => {
      const element = typeof document === 'undefined' ? null : document.createElement('div');
      return { question, element, placed: question.blockId !== null && placed.has(question.blockId) };
    });
  }, [editor, questions]);

  useEffect(() => {
    if (!editor || editor.isDestroyed) return;
    showQuestionSlots(
      editor,
      slots.flatMap(({ question, element, placed }) =>
        placed && element && question.blockId ? [{ questionId: question.id, blockId: question.blockId, element }] : [],
      ),
    );
  }, [editor, slots]);

  const below = slots.filter((slot) => !slot.placed);
  return (
    <>
      {slots.map(({ question, element, placed }) =>
        placed && element
          ? createPortal(<Question question={question} onChanged={onChanged} />, element, question.id)
          : null,
      )}
      {below.length > 0 ? (
        <section className="questions-below" aria-label="Questions about the whole entry or about text that is gone">
          {below.map(({ question }) => (
            <Question key={question.id} question={question} onChanged={onChanged} />
          ))}
        </section>
      ) : null}
    </>
  );
}

/** One question with its answers, and the form to answer it. */
export function Question({
  question,
  onChanged,
}: {
  question: QuestionDto;
  onChanged: (question: QuestionDto) => void;
}) {
  const [answering, setAnswering] = useState(false);
  return (
    <article className="question" aria-label={`Question by ${question.askedBy.name}`}>
      <p className="question-time figures">asked {question.askedAt.slice(11, 16)}</p>
      <p>
        <strong>{question.askedBy.name}</strong> asks: {question.text}
      </p>
      {question.quote ? <blockquote>{question.quote}</blockquote> : null}
      {question.answers.map((answer) => (
        <p key={answer.id} className="answer">
          <strong>{answer.by.name}</strong>, {moment(answer.at)}: {answer.text}
        </p>
      ))}
      <p className="text-quiet">
        {question.state}, asked {moment(question.askedAt)}{' '}
        {question.mayAnswer && !answering ? (
          <button type="button" className="small-press" onClick={() => setAnswering(true)}>
            Answer
          </button>
        ) : null}
      </p>
      {answering ? (
        <TextForm
          label={`Answer to ${question.askedBy.name}`}
          button="Answer"
          onCancel={() => setAnswering(false)}
          onSend={async (text) => {
            onChanged(
              await request<QuestionDto>('POST', `/api/questions/${encodeURIComponent(question.id)}/answers`, { text }),
            );
            setAnswering(false);
          }}
        />
      ) : null}
    </article>
  );
}

type FormProps = {
  label: string;
  button: string;
  onSend: (text: string) => Promise<void>;
  onCancel: () => void;
  children?: React.ReactNode;
};

function TextForm({ label, button, onSend, onCancel, children }: FormProps) {
  const [text, setText] = useState('');
  const [problem, setProblem] = useState<string | null>(null);
  const [busy, setBusy] = useState(false);
  const send = async (event: React.FormEvent) => {
    event.preventDefault();
    if (text.trim() === '') {
      setProblem('Write something first.');
      return;
    }
    setBusy(true);
    setProblem(null);
    try {
      await onSend(text.trim());
      setText('');
    } catch (error) {
      setProblem(
        error instanceof Error
          ? `${error.message} What you wrote is still here.`
          : 'Sending failed; the text is still here.',
      );
    } finally {
      setBusy(false);
    }
  };
  return (
    <form className="text-form" onSubmit={(event) => void send(event)}>
      {children}
      <LongField label={label} value={text} maxLength={4000} onChange={(event) => setText(event.target.value)} />
      <ErrorSentence>{problem}</ErrorSentence>
      <p className="flex gap-2">
        <button type="submit" className="press press-main" disabled={busy}>
          {busy ? 'Sending' : button}
        </button>
        <button type="button" className="press" onClick={onCancel}>
          Cancel
        </button>
      </p>
    </form>
  );
}

/** Form to ask about the chosen place: a block, with the words that were marked in it. */
export function AskForm({
  entry,
  editor,
  onAsked,
}: {
  entry: EntryDto;
  editor: Editor | null;
  onAsked: (question: QuestionDto) => void;
}) {
  const { focus } = useSheet();
  const [open, setOpen] = useState(false);
  const [place, setPlace] = useState<string>('');
  const blocks = useMemo(() => {
    const list: { id: string; words: string }[] = [];
    if (!open) return list;
    editor?.state.doc.forEach((block) => {
      const words = block.type.name === 'trace' ? `trace ${String(block.attrs.handle)}` : block.textContent;
      if (typeof block.attrs.id === 'string' && words.trim())
        list.push({ id: block.attrs.id, words: words.slice(0, 60) });
    });
    return list;
  }, [editor, open]);
  useEffect(() => setPlace(blockOf(editor, focus?.id ?? null) ?? ''), [editor, focus]);
  if (!entry.may.ask || !entry.head) return null;
  const { digest } = entry.head;
  if (!open) {
    return (
      <button type="button" className="press" onClick={() => setOpen(true)}>
        Ask
      </button>
    );
  }
  const quote = focus && blockOf(editor, focus.id) === place ? focus.quote.slice(0, 300) : '';
  return (
    <TextForm
      label="Your question"
      button="Ask"
      onCancel={() => setOpen(false)}
      onSend={async (text) => {
        const body = { versionDigest: digest, blockId: place === '' ? null : place, quote, text };
        onAsked(await request<QuestionDto>('POST', `/api/entries/${encodeURIComponent(entry.id)}/questions`, body));
        setOpen(false);
      }}
    >
      <label>
        about{' '}
        <select className="field" value={place} onChange={(event) => setPlace(event.target.value)}>
          <option value="">the whole entry</option>
          {blocks.map((block) => (
            <option key={block.id} value={block.id}>
              {block.words}
            </option>
          ))}
        </select>
      </label>
      {quote ? <blockquote>{quote}</blockquote> : null}
    </TextForm>
  );
}

/** Id of the top-level block that is or holds the node of this id. */
function blockOf(editor: Editor | null, id: string | null): string | null {
  let found: string | null = null;
  if (id === null) return null;
  editor?.state.doc.forEach((block) => {
    if (block.attrs.id === id) found = id;
    block.descendants((node) => {
      if (node.attrs.id === id && typeof block.attrs.id === 'string') found = block.attrs.id;
    });
  });
  return found;
}
