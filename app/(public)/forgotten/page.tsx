import type { Metadata } from 'next';
import { ForgottenForm } from '@/components/account/password-forms';

export const metadata: Metadata = { title: 'Password forgotten' };

export default function ForgottenPage() {
  return (
    <section className="max-w-sm">
      <h1>Password forgotten</h1>
      <p className="my-4">A link to set a new one goes to your e-mail address.</p>
      <ForgottenForm />
    </section>
  );
}
