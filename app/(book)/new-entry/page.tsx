import type { Metadata } from 'next';
import Link from 'next/link';
import { pageAccess } from '@/server/access/page';
import { listNotebooks } from '@/server/notebooks/service';

export const metadata: Metadata = { title: 'New entry' };

export default async function ChooseNotebookPage() {
  const { person } = await pageAccess('self', null, '/new-entry');
  const books = (await listNotebooks(person.id)).filter((book) => book.role === 'lead' || book.role === 'author');
  return (
    <>
      <h1>New entry</h1>
      <p className="my-3">In which notebook?</p>
      <ul className="max-w-xl">
        {books.map((book) => (
          <li key={book.code} className="border-t border-rule py-3">
            <Link href={`/notebooks/${book.code}/new`} className="font-medium">
              <span className="figures">{book.code}</span> {book.title}
            </Link>
            <p className="text-sm text-quiet">next leaf {book.leaves + 1}</p>
          </li>
        ))}
      </ul>
    </>
  );
}
