'use client';

import dynamic from 'next/dynamic';
import type { ReactNode } from 'react';
import type { DraftDto, EntryDto, PersonDto, VersionContentDto } from '@/lib/schemas/entry';
import '@/components/commands/commands.css';
import './entry.css';
import { ReadingSheet } from './reading-sheet';

// Editor, evaluation and their libraries are fetched by who writes; a reader does without.
const WritingSheet = dynamic(() => import('./writing-sheet').then((module) => module.WritingSheet));

export type EntrySheetProps = {
  entry: EntryDto;
  /** Given to whoever may write now; else null. */
  draft: DraftDto | null;
  /** The draft's equations as the page has typeset them, by `equationKey`. */
  equations: Record<string, string>;
  /** What is read when there is no draft to write: the head version, or an older one. */
  version: VersionContentDto | null;
  /** The version's text, rendered by the page: `<ReadingText>`. */
  text: ReactNode;
  person: PersonDto;
  /** Build id of the page, as in the header x-kelvinleaf-build. */
  build: string;
};

/** The sheet of an entry: written by who may, else read as the version has bound it. */
export function EntrySheet({ entry, draft, equations, version, text, person, build }: EntrySheetProps) {
  if (draft && entry.may.write)
    return (
      <WritingSheet
        key={draft.entryId}
        entry={entry}
        draft={draft}
        equations={equations}
        person={person}
        build={build}
      />
    );
  if (version) return <ReadingSheet key={version.id} entry={entry} version={version} person={person} text={text} />;
  return (
    <p className="entry-empty">
      {entry.notebook.code} leaf {entry.leaf}: nothing to read yet. {entry.author.name} has not cut a version of this
      entry.
    </p>
  );
}
