import Link from 'next/link';
import { redirect } from 'next/navigation';
import type { ReactNode } from 'react';
import { CommandShell } from '@/components/shell/command-shell';
import { BookHeader } from '@/components/shell/book-header';
import { currentPerson } from '@/server/access/page';
import { env } from '@/server/env/env';
import { toPersonDto } from '@/server/people/service';
import { countWaiting } from '@/server/queue/service';

export default async function BookLayout({ children }: { children: ReactNode }) {
  const person = await currentPerson();
  if (!person) redirect('/sign-in');
  return (
    <CommandShell>
      <a href="#content" className="sr-only focus:not-sr-only focus:absolute focus:z-50 focus:bg-sheet focus:p-3">
        Skip to the content
      </a>
      <BookHeader
        person={toPersonDto(person)}
        waiting={await countWaiting(person.id)}
        administrator={person.role === 'administrator'}
        demo={env().demo}
      />
      <main id="content" tabIndex={-1} className="mx-auto max-w-[92rem] px-3 py-5 outline-none sm:px-6">
        {children}
      </main>
      {env().demo ? (
        <footer className="mx-auto max-w-[92rem] px-3 py-6 text-sm text-quiet sm:px-6">
          Demonstration with invented data: the group, its people, devices and traces do not exist.{' '}
          <Link href="/mailbox" className="underline">
            Local mailbox
          </Link>
        </footer>
      ) : null}
    </CommandShell>
  );
}
