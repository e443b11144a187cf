import type { Metadata } from 'next';
import Link from 'next/link';
import { Suspense } from 'react';
import { AuditTable } from '@/components/notebook/audit-table';
import { pageAccess } from '@/server/access/page';
import { readAuditTrail } from '@/server/notebooks/service';

export const metadata: Metadata = { title: 'Audit trail' };

export default async function AuditPage({ params }: { params: Promise<{ code: string }> }) {
  const { code } = await params;
  const { notebook } = await pageAccess('notebook.audit', code, `/notebooks/${code}/log`);
  return (
    <>
      <p>
        <Link href={`/notebooks/${code}`}>{code}</Link>
      </p>
      <h1>Audit trail of {code}</h1>
      <Suspense>
        <AuditTable records={await readAuditTrail(notebook.id)} />
      </Suspense>
    </>
  );
}
