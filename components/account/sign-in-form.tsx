'use client';

import Link from 'next/link';
import { useState, type FormEvent } from 'react';
import { request } from '@/components/hooks/request';
import { Field } from '@/components/ui/field';
import { ErrorSentence } from '@/components/ui/sentence';

/** E-mail and password, then the second factor where one is set up. `to` is a path of this application. */
export function SignInForm({ to }: { to: string }) {
  const [step, setStep] = useState<'password' | 'code' | 'recovery'>('password');
  const [problem, setProblem] = useState<string | null>(null);
  const [busy, setBusy] = useState(false);

  const submit = async (event: FormEvent<HTMLFormElement>) => {
    event.preventDefault();
    const form = new FormData(event.currentTarget);
    setBusy(true);
    setProblem(null);
    try {
      if (step === 'password') {
        const answer = await request<{ secondFactor: boolean }>('POST', '/api/auth/sign-in', {
          email: form.get('email'),
          password: form.get('password'),
        });
        if (answer.secondFactor) {
          setStep('code');
          return;
        }
      } else {
        await request('POST', '/api/auth/second-factor', { code: form.get('code'), recovery: step === 'recovery' });
      }
      window.location.assign(to);
    } catch (error) {
      setProblem(error instanceof Error ? error.message : String(error));
    } finally {
      setBusy(false);
    }
  };

  return (
    <form onSubmit={submit} className="mt-4 max-w-sm space-y-4">
      <ErrorSentence>{problem}</ErrorSentence>
      {step === 'password' ? (
        <>
          <Field label="E-mail address" name="email" type="email" autoComplete="username" required autoFocus />
          <Field label="Password" name="password" type="password" autoComplete="current-password" required />
        </>
      ) : (
        <Field
          key={step}
          label={step === 'code' ? 'Code of your authenticator' : 'Recovery code'}
          name="code"
          inputMode={step === 'code' ? 'numeric' : 'text'}
          autoComplete="one-time-code"
          required
          autoFocus
        />
      )}
      <button type="submit" className="press press-main" disabled={busy}>
        {step === 'password' ? 'Sign in' : 'Continue'}
      </button>
      {step === 'password' ? (
        <p>
          <Link href="/forgotten">Password forgotten</Link>
        </p>
      ) : (
        <button type="button" className="press" onClick={() => setStep(step === 'code' ? 'recovery' : 'code')}>
          {step === 'code' ? 'Use a recovery code' : 'Use the authenticator'}
        </button>
      )}
    </form>
  );
}
