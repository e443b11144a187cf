'use client';

import { useCallback, useEffect, useState } from 'react';
import type { QuestionDto } from '@/lib/schemas/entry';

/** Questions as they stand, with those asked and answered here. */
export function useQuestions(given: QuestionDto[]) {
  const [questions, setQuestions] = useState(given);
  useEffect(() => setQuestions(given), [given]);
  const changed = useCallback((question: QuestionDto) => {
    setQuestions((all) =>
      all.some(({ id }) => id === question.id)
        ? all.map((other) => (other.id === question.id ? question : other))
        : [...all, question],
    );
  }, []);
  return { questions, changed };
}
