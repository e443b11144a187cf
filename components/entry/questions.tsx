'use client';

import { useEffect, useMemo, useState } from 'react';
import type { EntryDto, QuestionDto } from '@/lib/schemas/entry';
import { useSheet } from '@/components/editor/sheet-context/context';
import { LongField } from '@/components/ui/field';
import { ErrorSentence } from '@/components/ui/sentence';
import { request } from '@/components/hooks/request';
import type { SheetText } from './sheet-text';

const moment = (iso: string) => `${iso.slice(0, 10)} ${iso.slice(11, 16)} UTC`;

/** Questions whose block is gone, or that are about the whole entry. */
export function QuestionsBelow({
  questions,
  onChanged,
}: {
  questions: QuestionDto[];
  onChanged: (question: QuestionDto) => void;
}) {
  if (questions.length === 0) return null;
  return (
    <section className="questions-below" aria-label="Questions about the whole entry or about text that is gone">
      {questions.map((question) => (
        <Question key={question.id} question={question} onChanged={onChanged} />
      ))}
    </section>
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
  text,
  onAsked,
}: {
  entry: EntryDto;
  text: SheetText;
  onAsked: (question: QuestionDto) => void;
}) {
  const { focus } = useSheet();
  const [open, setOpen] = useState(false);
  const [place, setPlace] = useState<string>('');
  const blocks = useMemo(() => {
    if (!open) return [];
    const listed = text.blocks().filter(({ words }) => words.trim() !== '');
    return listed.map(({ id, words }) => ({ id, words: words.slice(0, 60) }));
  }, [text, open]);
  useEffect(() => setPlace((focus && text.blockOf(focus.id)) ?? ''), [text, focus]);
  if (!entry.may.ask || !entry.head) return null;
  const { digest } = entry.head;
  if (!open) {
    return (
      <button type="button" className="press" onClick={() => setOpen(true)}>
        Ask
      </button>
    );
  }
  const quote = focus && text.blockOf(focus.id) === place ? focus.quote.slice(0, 300) : '';
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
