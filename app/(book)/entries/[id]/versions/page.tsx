import type { Metadata } from 'next';
import Link from 'next/link';
import { History } from '@/components/entry/history';
import { pageAccess } from '@/server/access/page';
import { allows } from '@/server/access/rights';
import { listVersions } from '@/server/entries/version-service';

export const metadata: Metadata = { title: 'Versions' };

export default async function VersionsPage({ params }: { params: Promise<{ id: string }> }) {
  const { id } = await params;
  const { entry, notebook, standing } = await pageAccess('entry.read', id, `/entries/${id}/versions`);
  return (
    <>
      <p>
        <Link href={`/entries/${id}`}>
          {notebook.code} leaf {entry.leaf}
        </Link>
      </p>
      <h1 className="mb-4">Versions of “{entry.title}”</h1>
      <History entryId={id} versions={await listVersions(id)} mayRestore={allows('entry.write', standing)} />
    </>
  );
}
