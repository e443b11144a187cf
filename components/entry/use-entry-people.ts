'use client';

import type { Editor } from '@tiptap/core';
import { useCallback, useEffect, useState } from 'react';
import type { BlockStamps, EntryDto, PersonDto, QuestionDto } from '@/lib/schemas/entry';
import { showStamps } from '@/components/editor/stamps';

export type People = { names: Record<string, string>; initials: Record<string, string> };

/** Everyone who may have written in this entry, by id. */
export function peopleOf(entry: EntryDto, person: PersonDto | null): People {
  const all = [
    entry.author,
    ...entry.contributors,
    ...(entry.head ? [entry.head.createdBy] : []),
    ...(person ? [person] : []),
  ];
  return {
    names: Object.fromEntries(all.map(({ id, name }) => [id, name])),
    initials: Object.fromEntries(all.map(({ id, initials }) => [id, initials])),
  };
}

const toMinutes = (written: Record<string, string>) =>
  Object.entries(written)
    .map(([id, at]) => `${id} ${at.slice(0, 16)}`)
    .join();

/** Keeps the gutter in step with the stamps; seconds do not show there, so they do not redraw it. */
export function useStampsShown(
  editor: Editor | null,
  stamps: BlockStamps,
  written: Record<string, string>,
  people: People,
  own: string,
  workDate: string,
): void {
  const fresh = toMinutes(written);
  useEffect(() => {
    if (!editor || editor.isDestroyed) return;
    showStamps(editor, { stamps, written, initials: people.initials, own, workDate });
    // eslint-disable-next-line react-hooks/exhaustive-deps -- `fresh` stands for `written` by the minute
  }, [editor, stamps, fresh, people, own, workDate]);
}

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
