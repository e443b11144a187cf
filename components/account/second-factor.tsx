'use client';

import { useState } from 'react';
import { ActionForm } from '@/components/ui/action-form';
import { Field } from '@/components/ui/field';

/** Sets up or removes a time-based one-time password (RFC 6238) with recovery codes. */
export function SecondFactor({ on }: { on: boolean }) {
  const [made, setMade] = useState<{ uri: string; recoveryCodes: string[] } | null>(null);
  if (on) {
    return (
      <>
        <p className="mb-3">A code of your authenticator is asked for at every sign-in.</p>
        <ActionForm
          method="DELETE"
          url="/api/account/second-factor"
          submit="Remove the second factor"
          done={() => ({ go: '/account' })}
        >
          <Field label="Password" name="password" type="password" autoComplete="current-password" required />
        </ActionForm>
      </>
    );
  }
  if (made) {
    const secret = new URL(made.uri).searchParams.get('secret') ?? '';
    return (
      <>
        <ol className="list-decimal space-y-3 pl-5">
          <li>
            Enter this key in your authenticator (or <a href={made.uri}>open it there</a>):
            <code className="mt-1 block break-all bg-tint p-2">{secret.replace(/(.{4})/g, '$1 ')}</code>
          </li>
          <li>
            Keep these recovery codes on paper; each works once:
            <code className="mt-1 block columns-2 bg-tint p-2">
              {made.recoveryCodes.map((code) => (
                <span key={code} className="block">
                  {code}
                </span>
              ))}
            </code>
          </li>
          <li>Give the code that the authenticator shows:</li>
        </ol>
        <ActionForm
          method="PUT"
          url="/api/account/second-factor"
          submit="Turn it on"
          done={() => ({ go: '/account' })}
          className="mt-3 space-y-4"
        >
          <Field label="Code" name="code" inputMode="numeric" autoComplete="one-time-code" required />
        </ActionForm>
      </>
    );
  }
  return (
    <>
      <p className="mb-3">Optional: a code of an authenticator at every sign-in, beside the password.</p>
      <ActionForm
        method="POST"
        url="/api/account/second-factor"
        submit="Set it up"
        done={(answer) => {
          setMade(answer as { uri: string; recoveryCodes: string[] });
          return null;
        }}
      >
        <Field label="Password" name="password" type="password" autoComplete="current-password" required />
      </ActionForm>
    </>
  );
}
