import type { Metadata } from 'next';
import Link from 'next/link';
import { Suspense } from 'react';
import { EntryTable } from '@/components/entry/entry-table';
import { pageAccess } from '@/server/access/page';
import { listEntries } from '@/server/entries/reading-service';

type Params = { params: Promise<{ code: string }> };

export async function generateMetadata({ params }: Params): Promise<Metadata> {
  return { title: (await params).code };
}

export default async function NotebookPage({ params }: Params) {
  const { code } = await params;
  const { notebook, person } = await pageAccess('notebook.read', code, `/notebooks/${code}`);
  const entries = await listEntries(person.id, { notebookId: notebook.id });
  const writes = notebook.role === 'lead' || notebook.role === 'author';
  return (
    <>
      <div className="flex flex-wrap items-end justify-between gap-4">
        <div>
          <p className="figures text-quiet">{notebook.code}</p>
          <h1>{notebook.title}</h1>
          <p className="text-sm text-quiet">my role: {notebook.role}</p>
        </div>
        <div className="flex flex-wrap gap-2">
          <Link href={`/notebooks/${code}/members`} className="press">
            Members
          </Link>
          {notebook.role === 'lead' || notebook.role === 'reader' ? (
            <Link href={`/notebooks/${code}/log`} className="press">
              Audit trail
            </Link>
          ) : null}
          {writes ? (
            <Link href={`/notebooks/${code}/new`} className="press press-main">
              New entry
            </Link>
          ) : null}
        </div>
      </div>
      <Suspense>
        <EntryTable entries={entries} caption={`Leaves of ${code}`} empty="No leaf is written yet." />
      </Suspense>
    </>
  );
}
