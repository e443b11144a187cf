import type { Metadata } from 'next';
import { JoinForm } from '@/components/account/password-forms';
import { ErrorSentence } from '@/components/ui/sentence';
import { AppError } from '@/lib/errors/app-error';
import { findInvitation } from '@/server/accounts/service';

export const metadata: Metadata = { title: 'Join', referrer: 'no-referrer' };

export default async function JoinPage({ searchParams }: { searchParams: Promise<{ token?: string }> }) {
  const { token } = await searchParams;
  const secret = typeof token === 'string' ? token : '';
  let invitation;
  try {
    invitation = await findInvitation(secret);
  } catch (error) {
    if (!(error instanceof AppError)) throw error;
    return (
      <section className="max-w-sm">
        <h1>Join</h1>
        <ErrorSentence>{error.message}</ErrorSentence>
      </section>
    );
  }
  const first = invitation.email.endsWith('@first.invalid');
  return (
    <section className="max-w-sm">
      <h1>Join the notebook</h1>
      <p className="my-4">
        {first
          ? 'You become the first administrator of this installation.'
          : `Your account will be ${invitation.email}.`}
      </p>
      <JoinForm token={secret} name={first ? '' : invitation.name} askEmail={first} />
    </section>
  );
}
