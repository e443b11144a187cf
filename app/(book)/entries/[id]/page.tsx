import type { Metadata } from 'next';
import { EntryActions } from '@/components/entry/entry-actions';
import { EntrySheet } from '@/components/entry/entry-sheet';
import { ReadingText } from '@/components/reading/reading-text';
import { typesetAll } from '@/lib/document/typeset-all';
import { pageAccess } from '@/server/access/page';
import { readDraft } from '@/server/entries/draft-service';
import { entryChoices, readEntry } from '@/server/entries/reading-service';
import { readVersion } from '@/server/entries/version-service';
import { env } from '@/server/env/env';
import { toPersonDto } from '@/server/people/service';

type Params = { params: Promise<{ id: string }> };

export async function generateMetadata({ params }: Params): Promise<Metadata> {
  const { id } = await params;
  const { notebook, entry } = await pageAccess('entry.read', id, `/entries/${id}`);
  return { title: `${notebook.code} leaf ${entry.leaf}` };
}

export default async function EntryPage({ params }: Params) {
  const { id } = await params;
  const scope = await pageAccess('entry.read', id, `/entries/${id}`);
  const entry = await readEntry(scope);
  const draft = entry.may.write ? await readDraft(id) : null;
  // A struck-out draft that was never cut is still read by its members.
  const version = draft ? null : entry.head ? await readVersion(id, entry.head.seq) : null;
  const person = toPersonDto(scope.person);
  return (
    <>
      <EntryActions
        entry={entry}
        choices={entry.may.write ? await entryChoices(scope) : null}
        lead={scope.notebook.role === 'lead'}
      />
      <EntrySheet
        entry={entry}
        draft={draft}
        equations={draft ? typesetAll(draft.doc) : {}}
        version={version}
        text={version ? <ReadingText entry={entry} version={version} person={person} /> : null}
        person={person}
        build={env().buildId}
      />
    </>
  );
}
