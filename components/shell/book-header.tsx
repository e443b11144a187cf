'use client';

import Link from 'next/link';
import { usePathname } from 'next/navigation';
import { FindButton } from '@/components/commands/command-menu';
import { request } from '@/components/hooks/request';
import { Mark } from '@/components/ui/stair';
import { ThemeSwitch } from '@/components/ui/theme-switch';
import type { PersonDto } from '@/lib/schemas/entry';

const places = [
  { href: '/', text: 'Today' },
  { href: '/notebooks', text: 'Notebooks' },
  { href: '/cooldowns', text: 'Cooldowns' },
  { href: '/devices', text: 'Devices' },
  { href: '/countersign', text: 'Countersign' },
] as const;

export function BookHeader({
  person,
  waiting,
  administrator,
  demo,
}: {
  person: PersonDto;
  waiting: number;
  administrator: boolean;
  demo: boolean;
}) {
  const path = usePathname();
  const here = (href: string) => (href === '/' ? path === '/' : path.startsWith(href));
  const links = [...places, ...(administrator ? [{ href: '/administration', text: 'Administration' }] : [])];
  return (
    <header className="border-b border-rule bg-sheet">
      <div className="mx-auto flex max-w-[92rem] flex-wrap items-center gap-x-5 gap-y-1 px-3 py-2 sm:px-6">
        <Link href="/" className="flex items-center gap-2 font-semibold no-underline">
          <Mark /> Kelvinleaf
        </Link>
        <nav
          aria-label="Main"
          className="order-3 -mx-1 flex w-full gap-x-1 relative overflow-x-auto lg:order-none lg:w-auto"
        >
          {links.map((link) => (
            <Link
              key={link.href}
              href={link.href}
              aria-current={here(link.href) ? 'page' : undefined}
              className={`whitespace-nowrap border-b-2 px-2 py-1.5 no-underline ${here(link.href) ? 'border-action font-semibold text-ink' : 'border-transparent text-quiet hover:text-action'}`}
            >
              {link.text}
              {link.href === '/countersign' && waiting > 0 ? (
                <span className="ml-1 font-semibold text-signed">
                  {waiting}
                  <span className="sr-only"> waiting</span>
                </span>
              ) : null}
            </Link>
          ))}
        </nav>
        <div className="ml-auto flex items-center gap-3">
          <FindButton />
          <details className="relative">
            <summary className="min-h-7 cursor-pointer list-none py-1 text-quiet hover:text-action">
              <span className="hidden sm:inline">{person.name}</span>
              <span className="sm:hidden" aria-hidden="true">
                {person.initials}
              </span>
              <span className="sr-only sm:hidden">{person.name}</span>
            </summary>
            <div className="absolute right-0 z-30 mt-1 w-64 space-y-3 border border-edge bg-sheet p-4">
              <p className="font-semibold">{person.name}</p>
              <p>
                <Link href="/account">Account</Link>
              </p>
              {demo ? (
                <p>
                  <Link href="/mailbox">Local mailbox</Link>
                </p>
              ) : null}
              <ThemeSwitch />
              <SignOut personId={person.id} />
            </div>
          </details>
        </div>
      </div>
    </header>
  );
}

function SignOut({ personId }: { personId: string }) {
  const leave = async () => {
    const { maySignOut } = await import('@/components/entry/may-sign-out');
    if (!(await maySignOut(personId))) return;
    await request('POST', '/api/auth/sign-out', {});
    window.location.assign('/sign-in');
  };
  return (
    <button type="button" className="press w-full" onClick={() => void leave()}>
      Sign out
    </button>
  );
}
