'use client';

import { useState, type FormEvent, type ReactNode } from 'react';
import { request } from '@/components/hooks/request';
import { ErrorSentence } from './sentence';

type Props = {
  method: 'POST' | 'PUT' | 'PATCH' | 'DELETE';
  url: string;
  /** Body from the form's fields; without it the fields are sent as they are. */
  toBody?: (form: FormData) => unknown;
  submit: string;
  /** Where to go, or what to say, once it is done. */
  done: (answer: Record<string, unknown>) => string | { go: string } | null;
  children: ReactNode;
  /** Empties the fields after success. */
  reset?: boolean;
  className?: string;
};

/** A form that sends JSON to a route and shows the route's sentence where it fails; what was typed stays in the fields. */
export function ActionForm({
  method,
  url,
  toBody,
  submit,
  done,
  children,
  reset = false,
  className = 'space-y-4',
}: Props) {
  const [problem, setProblem] = useState<string | null>(null);
  const [said, setSaid] = useState<string | null>(null);
  const [busy, setBusy] = useState(false);
  const send = async (event: FormEvent<HTMLFormElement>) => {
    event.preventDefault();
    const element = event.currentTarget;
    const form = new FormData(element);
    setBusy(true);
    setProblem(null);
    setSaid(null);
    try {
      const answer = await request<Record<string, unknown>>(
        method,
        url,
        toBody ? toBody(form) : Object.fromEntries(form),
      );
      const next = done(answer);
      if (reset) element.reset();
      if (next && typeof next === 'object') window.location.assign(next.go);
      else setSaid(next);
    } catch (error) {
      setProblem(error instanceof Error ? error.message : String(error));
    } finally {
      setBusy(false);
    }
  };
  return (
    <form onSubmit={send} className={className}>
      {children}
      <ErrorSentence>{problem}</ErrorSentence>
      <p role="status" className={said ? 'text-signed' : 'sr-only'}>
        {said}
      </p>
      <button type="submit" className="press press-main" disabled={busy}>
        {submit}
      </button>
    </form>
  );
}
