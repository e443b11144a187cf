'use client';

import { ActionForm } from '@/components/ui/action-form';
import { Field } from '@/components/ui/field';

const passwordHint = '8 to 128 characters; several words are easy to keep in mind.';

export function ForgottenForm() {
  return (
    <ActionForm
      method="POST"
      url="/api/auth/forgotten"
      submit="Send the link"
      done={(answer) => String(answer.sentence)}
    >
      <Field label="E-mail address" name="email" type="email" autoComplete="username" required />
    </ActionForm>
  );
}

export function ResetForm({ token }: { token: string }) {
  return (
    <ActionForm
      method="POST"
      url="/api/auth/reset"
      submit="Set the password"
      toBody={(form) => ({ token, password: form.get('password') })}
      done={() => ({ go: '/sign-in' })}
    >
      <Field
        label="New password"
        name="password"
        type="password"
        autoComplete="new-password"
        hint={passwordHint}
        required
      />
    </ActionForm>
  );
}

export function JoinForm({ token, name, askEmail }: { token: string; name: string; askEmail: boolean }) {
  return (
    <ActionForm
      method="POST"
      url="/api/auth/join"
      submit="Join"
      toBody={(form) => ({
        token,
        name: form.get('name'),
        password: form.get('password'),
        ...(askEmail ? { email: form.get('email') } : {}),
      })}
      done={() => ({ go: '/' })}
    >
      <Field
        label="Full name"
        name="name"
        defaultValue={name}
        autoComplete="name"
        hint="As it is printed with a signature."
        required
      />
      {askEmail ? <Field label="E-mail address" name="email" type="email" autoComplete="username" required /> : null}
      <Field
        label="Password"
        name="password"
        type="password"
        autoComplete="new-password"
        hint={passwordHint}
        required
      />
    </ActionForm>
  );
}

export function ChangePasswordForm() {
  return (
    <ActionForm
      method="PUT"
      url="/api/account/password"
      submit="Change the password"
      reset
      done={() => 'The password is changed; every other device is signed out.'}
    >
      <Field label="Present password" name="current" type="password" autoComplete="current-password" required />
      <Field
        label="New password"
        name="next"
        type="password"
        autoComplete="new-password"
        hint={passwordHint}
        required
      />
    </ActionForm>
  );
}
