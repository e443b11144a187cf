import type { Metadata } from 'next';
import Link from 'next/link';
import { Suspense } from 'react';
import { CooldownTable } from '@/components/cooldown/cooldown-table';
import { pageAccess } from '@/server/access/page';
import { listCooldowns } from '@/server/cooldowns/service';
import { listNotebooks } from '@/server/notebooks/service';

export const metadata: Metadata = { title: 'Cooldowns' };

export default async function CooldownsPage() {
  const { person } = await pageAccess('self', null, '/cooldowns');
  const books = (await listNotebooks(person.id)).filter((book) => book.role === 'lead' || book.role === 'author');
  return (
    <>
      <div className="flex flex-wrap items-end justify-between gap-4">
        <h1>Cooldowns</h1>
        <div className="flex flex-wrap gap-2">
          {books.map((book) => (
            <Link key={book.code} href={`/notebooks/${book.code}/new-cooldown`} className="press">
              New cooldown in {book.code}
            </Link>
          ))}
        </div>
      </div>
      <Suspense>
        <CooldownTable cooldowns={await listCooldowns(person.id)} />
      </Suspense>
    </>
  );
}
