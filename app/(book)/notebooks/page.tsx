import type { Metadata } from 'next';
import { Suspense } from 'react';
import { NotebookTable } from '@/components/notebook/notebook-table';
import { FoundNotebook } from '@/components/notebook/notebook-forms';
import { pageAccess } from '@/server/access/page';
import { listNotebooks } from '@/server/notebooks/service';

export const metadata: Metadata = { title: 'Notebooks' };

export default async function NotebooksPage() {
  const { person } = await pageAccess('self', null, '/notebooks');
  return (
    <>
      <h1>Notebooks</h1>
      <Suspense>
        <NotebookTable notebooks={await listNotebooks(person.id)} />
      </Suspense>
      <details className="mt-8 max-w-xl">
        <summary className="press cursor-pointer list-none">Begin a notebook</summary>
        <FoundNotebook />
      </details>
    </>
  );
}
