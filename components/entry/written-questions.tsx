'use client';

import type { Editor } from '@tiptap/core';
import { useEffect, useMemo } from 'react';
import { createPortal } from 'react-dom';
import type { QuestionDto } from '@/lib/schemas/entry';
import { showQuestionSlots } from '@/components/editor/question-slots';
import { Question, QuestionsBelow } from './questions';

type Props = { editor: Editor | null; questions: QuestionDto[]; onChanged: (question: QuestionDto) => void };

/** In an entry that is being written: questions at the place they were asked about, the others below the text. */
export function WrittenQuestions({ editor, questions, onChanged }: Props) {
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

  return (
    <>
      {slots.map(({ question, element, placed }) =>
        placed && element
          ? createPortal(<Question question={question} onChanged={onChanged} />, element, question.id)
          : null,
      )}
      <QuestionsBelow
        questions={slots.filter(({ placed }) => !placed).map(({ question }) => question)}
        onChanged={onChanged}
      />
    </>
  );
}
