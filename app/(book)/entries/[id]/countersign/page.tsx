import type { Metadata } from 'next';
import Link from 'next/link';
import { Binding } from '@/components/entry/binding';
import { SigningForm } from '@/components/entry/signing-form';
import { AttentionSentence } from '@/components/ui/sentence';
import { pageAccess } from '@/server/access/page';
import { readBinding } from '@/server/signing/service';
import { readObstacle } from '@/server/signing/witness-service';

export const metadata: Metadata = { title: 'Countersign' };

export default async function CountersignPage({ params }: { params: Promise<{ id: string }> }) {
  const { id } = await params;
  const scope = await pageAccess('entry.countersign', id, `/entries/${id}/countersign`);
  const binding = await readBinding(scope, 'countersign');
  const obstacle = await readObstacle(scope);
  return (
    <>
      <p>
        <Link href={`/entries/${id}`}>Back to the entry</Link>
      </p>
      <h1 className="mb-4">Countersign leaf {binding.leaf}</h1>
      <div className="grid gap-8 lg:grid-cols-[1fr_24rem]">
        <Binding binding={binding} />
        <div>
          {obstacle ? (
            <AttentionSentence>{obstacle}</AttentionSentence>
          ) : (
            <SigningForm entryId={id} purpose="countersign" binding={binding} />
          )}
        </div>
      </div>
    </>
  );
}
