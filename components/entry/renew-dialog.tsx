'use client';

import { Dialog } from 'radix-ui';
import { useState } from 'react';
import { Field } from '@/components/ui/field';
import { ErrorSentence } from '@/components/ui/sentence';
import { request } from '@/components/hooks/request';

type Props = { open: boolean; onOpenChange: (open: boolean) => void; personName: string; onRenewed: () => void };

/** Signs in again without leaving the page, when the session has ended while someone wrote. */
export function RenewDialog({ open, onOpenChange, personName, onRenewed }: Props) {
  const [email, setEmail] = useState('');
  const [password, setPassword] = useState('');
  const [problem, setProblem] = useState<string | null>(null);
  const [busy, setBusy] = useState(false);

  const submit = async (event: React.FormEvent) => {
    event.preventDefault();
    setBusy(true);
    setProblem(null);
    try {
      await request('POST', '/api/session/renew', { email, password });
      setPassword('');
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
            The session of {personName} has ended. What was written is kept in this browser and goes to the server once
            you have signed in.
          </Dialog.Description>
          <form onSubmit={(event) => void submit(event)} className="grid gap-3">
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
