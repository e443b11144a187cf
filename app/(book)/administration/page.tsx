import type { Metadata } from 'next';
import { Suspense } from 'react';
import { AccountsTable, InvitationForm, InvitationList, OutboxTable } from '@/components/administration/people';
import { AttentionSentence } from '@/components/ui/sentence';
import { pageAccess } from '@/server/access/page';
import { readAdministration } from '@/server/administration/service';

export const metadata: Metadata = { title: 'Administration' };

export default async function AdministrationPage() {
  const { person } = await pageAccess('installation.administer', null, '/administration');
  const { accounts, invitations, outbox, recovery, storage } = await readAdministration();
  return (
    <>
      <h1>Administration</h1>
      {recovery ? (
        <AttentionSentence>
          At the start of <span className="figures">{recovery.at.slice(0, 16).replace('T', ' ')}</span> UTC:{' '}
          {recovery.sentence}
        </AttentionSentence>
      ) : null}
      <section className="mt-6">
        <h2>People</h2>
        <Suspense>
          <AccountsTable accounts={accounts} selfId={person.id} />
        </Suspense>
      </section>
      <div className="mt-10 grid gap-10 lg:grid-cols-2">
        <section>
          <h2 className="mb-2">Invite somebody</h2>
          <InvitationForm />
        </section>
        <section>
          <h2 className="mb-2">Invitations</h2>
          <InvitationList invitations={invitations} />
        </section>
      </div>
      <section className="mt-10">
        <h2>Mail outbox</h2>
        <p className="text-sm text-quiet">That a mail was sent, never its links.</p>
        <Suspense>
          <OutboxTable mails={outbox} />
        </Suspense>
      </section>
      <section className="mt-10">
        <h2>Storage</h2>
        <p className="figures">
          {storage.files} received files, {(storage.bytes / 1e6).toFixed(1)} MB of {(storage.quota / 1e9).toFixed(0)} GB
        </p>
      </section>
    </>
  );
}
