import type { Metadata } from 'next';
import { Suspense } from 'react';
import { QueueTable } from '@/components/entry/queue-table';
import { pageAccess } from '@/server/access/page';
import { readQueue } from '@/server/queue/service';

export const metadata: Metadata = { title: 'Countersign' };

export default async function QueuePage() {
  const { person } = await pageAccess('self', null, '/countersign');
  return (
    <>
      <h1>Countersign</h1>
      <p className="my-2 max-w-2xl text-quiet">
        Signed entries of others in which you took no part. Those for which you were asked by name come first.
      </p>
      <Suspense>
        <QueueTable lines={await readQueue(person.id)} />
      </Suspense>
    </>
  );
}
