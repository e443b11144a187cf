import type { Metadata } from 'next';
import { ResetForm } from '@/components/account/password-forms';

export const metadata: Metadata = { title: 'New password' };

export default async function ResetPage({ searchParams }: { searchParams: Promise<{ token?: string }> }) {
  const { token } = await searchParams;
  return (
    <section className="max-w-sm">
      <h1>New password</h1>
      <p className="my-4">Every device that is signed in now will have to sign in again.</p>
      <ResetForm token={typeof token === 'string' ? token : ''} />
    </section>
  );
}
