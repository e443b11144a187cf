'use client';

import { createContext, useContext } from 'react';
import type { DerivedColumn } from '@/lib/expression/contract';
import type { QuestionDto } from '@/lib/schemas/entry';

/** What the blocks of a version that is read need besides the sheet. */
type VersionContextValue = {
  questions: QuestionDto[];
  onQuestion: (question: QuestionDto) => void;
  /** The samples of derived columns, by symbol. */
  columns: () => Promise<Map<string, DerivedColumn>>;
};

const VersionContext = createContext<VersionContextValue | null>(null);

export const VersionProvider = VersionContext.Provider;

export function useVersion(): VersionContextValue {
  const version = useContext(VersionContext);
  if (!version) throw new Error('A part of the version stands outside of its sheet.');
  return version;
}
