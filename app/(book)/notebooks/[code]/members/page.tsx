import type { Metadata } from 'next';
import Link from 'next/link';
import { Members, NotebookFacts } from '@/components/notebook/notebook-forms';
import { pageAccess } from '@/server/access/page';
import { listMembers, listNotebooks } from '@/server/notebooks/service';

export const metadata: Metadata = { title: 'Members' };

export default async function MembersPage({ params }: { params: Promise<{ code: string }> }) {
  const { code } = await params;
  const { notebook, person } = await pageAccess('notebook.read', code, `/notebooks/${code}/members`);
  const members = await listMembers(notebook.id);
  const about = (await listNotebooks(person.id)).find((book) => book.code === code);
  const lead = notebook.role === 'lead';
  return (
    <>
      <p>
        <Link href={`/notebooks/${code}`}>{code}</Link>
      </p>
      <h1>Members of {code}</h1>
      <div className="mt-4 grid gap-10 lg:grid-cols-2">
        <section>
          <Members code={code} members={members} mayChange={lead} />
        </section>
        {lead ? (
          <section>
            <h2 className="mb-3">About the notebook</h2>
            <NotebookFacts
              code={code}
              title={notebook.title}
              description={about?.description ?? ''}
              lateAfterDays={notebook.lateAfterDays}
            />
          </section>
        ) : null}
      </div>
    </>
  );
}
