import type { Metadata } from 'next';
import { ChangePasswordForm } from '@/components/account/password-forms';
import { SecondFactor } from '@/components/account/second-factor';
import { Sessions, Tokens } from '@/components/account/sessions';
import { Facts } from '@/components/ui/facts';
import { pageAccess } from '@/server/access/page';
import { listSessions, listTokens } from '@/server/accounts/service';

export const metadata: Metadata = { title: 'Account' };

export default async function AccountPage() {
  const { person } = await pageAccess('self', null, '/account');
  return (
    <>
      <h1>Account</h1>
      <div className="mt-4 grid gap-10 lg:grid-cols-2">
        <section>
          <h2 className="mb-2">Profile</h2>
          <Facts
            facts={[
              ['Printed name', person.name],
              ['Initials', person.initials],
              ['E-mail', person.email],
              ['Role here', person.role],
            ]}
          />
          <p className="mt-2 text-sm text-quiet">
            The printed name stands on signatures; an administrator invites anew where it has to change.
          </p>
        </section>
        <section>
          <h2 className="mb-2">Password</h2>
          <ChangePasswordForm />
        </section>
        <section>
          <h2 className="mb-2">Second factor</h2>
          <SecondFactor on={person.twoFactor} />
        </section>
        <section>
          <h2 className="mb-2">Sessions</h2>
          <Sessions sessions={await listSessions(person)} />
        </section>
        <section className="lg:col-span-2">
          <h2 className="mb-2">Tokens for programs</h2>
          <Tokens tokens={await listTokens(person)} />
        </section>
      </div>
    </>
  );
}
