import type { Metadata } from 'next';
import Link from 'next/link';
import { EntrySheet } from '@/components/entry/entry-sheet';
import { ReadingText } from '@/components/reading/reading-text';
import { AttentionSentence } from '@/components/ui/sentence';
import { pageAccess } from '@/server/access/page';
import { readEntry } from '@/server/entries/reading-service';
import { readVersion } from '@/server/entries/version-service';
import { env } from '@/server/env/env';
import { toPersonDto } from '@/server/people/service';
import { notFound } from 'next/navigation';

export const metadata: Metadata = { title: 'Version' };

export default async function VersionPage({ params }: { params: Promise<{ id: string; seq: string }> }) {
  const { id, seq } = await params;
  const scope = await pageAccess('entry.read', id, `/entries/${id}/versions/${seq}`);
  const number = Number(seq);
  if (!Number.isInteger(number) || number < 1 || number > scope.entry.headSeq) notFound();
  const version = await readVersion(id, number);
  const entry = await readEntry(scope);
  const person = toPersonDto(scope.person);
  return (
    <>
      <AttentionSentence>
        Version {number} of {scope.entry.headSeq}, as it was bound.{' '}
        <Link href={`/entries/${id}`} className="underline">
          To the newest
        </Link>
      </AttentionSentence>
      <EntrySheet
        entry={entry}
        draft={null}
        equations={{}}
        version={version}
        text={<ReadingText entry={entry} version={version} person={person} />}
        person={person}
        build={env().buildId}
      />
    </>
  );
}
