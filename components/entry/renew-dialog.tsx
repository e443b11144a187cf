'use client';

import { Dialog } from 'radix-ui';
import { useState } from 'react';
import { Field } from '@/components/ui/field';
import type { PersonDto } from '@/lib/schemas/entry';
import { ErrorSentence } from '@/components/ui/sentence';
import { request } from '@/components/hooks/request';

type Props = {
  open: boolean;
  onOpenChange: (open: boolean) => void;
  person: PersonDto;
  onRenewed: () => void;
};

/** Signs in again without leaving the page, when the session has ended while someone wrote. */
export function RenewDialog({ open, onOpenChange, person, onRenewed }: Props) {
  const [email, setEmail] = useState('');
  const [password, setPassword] = useState('');
  const [problem, setProblem] = useState<string | null>(null);
  const [busy, setBusy] = useState(false);
  const [asksCode, setAsksCode] = useState(false);
  const [code, setCode] = useState('');

  const submit = async (event: React.FormEvent) => {
    event.preventDefault();
    setBusy(true);
    setProblem(null);
    try {
      if (asksCode) {
        await request('POST', '/api/auth/second-factor', { code, recovery: false });
      } else {
        const answer = await request<{ secondFactor: boolean }>('POST', '/api/session/renew', { email, password });
        setPassword('');
        if (answer.secondFactor) {
          setAsksCode(true);
          return;
        }
      }
      const { person: now } = await request<{ person: PersonDto | null }>('GET', '/api/session');
      if (now?.id !== person.id) {
        // The text belongs to who wrote it: another person's sign-in neither sends nor sees it.
        setAsksCode(false);
        setProblem(
          `This text is ${person.name}’s, and you signed in as ${now?.name ?? 'nobody'}. It stays kept for ${person.name}; sign in as ${person.name} to send it.`,
        );
        return;
      }
      setAsksCode(false);
      onRenewed();
      onOpenChange(false);
    } catch (error) {
      setProblem(error instanceof Error ? error.message : 'Signing in failed. The text is still here.');
    } finally {
      setBusy(false);
    }
  };

  return (
    <Dialog.Root open={open} onOpenChange={onOpenChange}>
      <Dialog.Portal>
        <Dialog.Overlay className="dialog-shade" />
        <Dialog.Content className="dialog">
          <Dialog.Title>Sign in again</Dialog.Title>
          <Dialog.Description>
            The session of {person.name} has ended. What was written is kept in this browser and goes to the server once
            you have signed in.
          </Dialog.Description>
          <form onSubmit={(event) => void submit(event)} className="grid gap-3">
            {asksCode ? (
              <Field
                label="Code of your authenticator"
                inputMode="numeric"
                autoComplete="one-time-code"
                required
                value={code}
                onChange={(e) => setCode(e.target.value)}
              />
            ) : (
              <>
                <Field
                  label="E-mail"
                  type="email"
                  autoComplete="username"
                  required
                  value={email}
                  onChange={(e) => setEmail(e.target.value)}
                />
                <Field
                  label="Password"
                  type="password"
                  autoComplete="current-password"
                  required
                  value={password}
                  onChange={(e) => setPassword(e.target.value)}
                />
              </>
            )}
            <ErrorSentence>{problem}</ErrorSentence>
            <p className="flex gap-2">
              <button type="submit" className="press press-main" disabled={busy}>
                {busy ? 'Signing in' : 'Sign in'}
              </button>
              <Dialog.Close className="press">Later</Dialog.Close>
            </p>
          </form>
        </Dialog.Content>
      </Dialog.Portal>
    </Dialog.Root>
  );
}
