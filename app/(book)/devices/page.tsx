import type { Metadata } from 'next';
import Link from 'next/link';
import { Suspense } from 'react';
import { DeviceTable } from '@/components/device/device-table';
import { pageAccess } from '@/server/access/page';
import { listDevices } from '@/server/devices/service';
import { listNotebooks } from '@/server/notebooks/service';

export const metadata: Metadata = { title: 'Devices' };

export default async function DevicesPage() {
  const { person } = await pageAccess('self', null, '/devices');
  const books = (await listNotebooks(person.id)).filter((book) => book.role === 'lead' || book.role === 'author');
  return (
    <>
      <div className="flex flex-wrap items-end justify-between gap-4">
        <h1>Devices</h1>
        <div className="flex flex-wrap gap-2">
          {books.map((book) => (
            <Link key={book.code} href={`/notebooks/${book.code}/new-device`} className="press">
              New device in {book.code}
            </Link>
          ))}
        </div>
      </div>
      <Suspense>
        <DeviceTable devices={await listDevices(person.id)} />
      </Suspense>
    </>
  );
}
