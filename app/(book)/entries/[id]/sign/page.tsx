import type { Metadata } from 'next';
import Link from 'next/link';
import { Binding } from '@/components/entry/binding';
import { CutVersion } from '@/components/entry/cut-version';
import { SigningForm } from '@/components/entry/signing-form';
import { AttentionSentence } from '@/components/ui/sentence';
import { pageAccess } from '@/server/access/page';
import { possibleWitnesses } from '@/server/entries/reading-service';
import { readBinding, readRevision } from '@/server/signing/service';

export const metadata: Metadata = { title: 'Sign' };

export default async function SignPage({ params }: { params: Promise<{ id: string }> }) {
  const { id } = await params;
  const scope = await pageAccess('entry.sign', id, `/entries/${id}/sign`);
  if (scope.entry.headSeq === 0) {
    return (
      <section className="max-w-xl">
        <h1>Sign</h1>
        <p className="my-3">No version of this entry is cut yet. A signature binds a version.</p>
        <CutVersion entryId={id} revision={await readRevision(id)} />
      </section>
    );
  }
  const binding = await readBinding(scope, 'sign');
  return (
    <>
      <p>
        <Link href={`/entries/${id}`}>Back to the entry</Link>
      </p>
      <h1 className="mb-4">Sign leaf {binding.leaf}</h1>
      {binding.draftIsNewer ? (
        <AttentionSentence>
          <p className="mb-2">
            The draft has changed since version {binding.seq} was cut; what stands below is the older text.
          </p>
          <CutVersion entryId={id} revision={binding.revision} />
        </AttentionSentence>
      ) : null}
      <div className="grid gap-8 lg:grid-cols-[1fr_24rem]">
        <Binding binding={binding} />
        {binding.draftIsNewer ? null : (
          <div>
            <SigningForm entryId={id} purpose="sign" binding={binding} witnesses={await possibleWitnesses(scope)} />
          </div>
        )}
      </div>
    </>
  );
}
