import type { Metadata } from 'next';
import { notFound } from 'next/navigation';
import { DemoNotice } from '@/components/account/demo-notice';
import { pageAccess } from '@/server/access/page';
import { openMailboxIfDemo } from '@/server/mail/mailbox-service';

export const metadata: Metadata = { title: 'Local mailbox' };

export default async function MailboxPage() {
  await pageAccess('self', null, '/mailbox');
  const mails = await openMailboxIfDemo();
  if (!mails) notFound();
  return (
    <>
      <h1 className="mb-4">Local mailbox</h1>
      <DemoNotice mails={mails} />
    </>
  );
}
