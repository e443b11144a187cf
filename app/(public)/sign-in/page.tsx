import type { Metadata } from 'next';
import { SignInForm } from '@/components/account/sign-in-form';
import { DemoNotice } from '@/components/account/demo-notice';
import { safePath } from '@/server/access/page';
import { openMailboxIfDemo } from '@/server/mail/mailbox-service';

export const metadata: Metadata = { title: 'Sign in' };

export default async function SignInPage({ searchParams }: { searchParams: Promise<{ to?: string }> }) {
  const { to } = await searchParams;
  const mails = await openMailboxIfDemo();
  return (
    <div className="grid gap-10 md:grid-cols-2">
      <section>
        <h1>Sign in</h1>
        <SignInForm to={safePath(typeof to === 'string' ? to : undefined)} />
      </section>
      {mails ? <DemoNotice mails={mails} /> : null}
    </div>
  );
}
