'use client';

import { Question } from '@/components/entry/questions';
import { useVersion } from './version-context';

/** The questions about the block above. */
export function PlacedQuestions({ blockId }: { blockId: string }) {
  const { questions, onQuestion } = useVersion();
  return questions
    .filter((question) => question.blockId === blockId)
    .map((question) => (
      <div key={question.id}>
        <Question question={question} onChanged={onQuestion} />
      </div>
    ));
}
