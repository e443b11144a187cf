import type { Metadata } from 'next';
import Link from 'next/link';
import { Suspense } from 'react';
import { DeviceForm } from '@/components/device/device-form';
import { EntryTable } from '@/components/entry/entry-table';
import { Facts } from '@/components/ui/facts';
import { pageAccess } from '@/server/access/page';
import { readDevice } from '@/server/devices/service';
import { listEntries } from '@/server/entries/reading-service';

export const metadata: Metadata = { title: 'Device' };

export default async function DevicePage({ params }: { params: Promise<{ id: string }> }) {
  const { id } = await params;
  const { person, notebook } = await pageAccess('device.read', id, `/devices/${id}`);
  const device = await readDevice(id);
  const entries = await listEntries(person.id, { deviceId: id });
  return (
    <>
      <p>
        <Link href="/devices">Devices</Link>
      </p>
      <h1>{device.name}</h1>
      <div className="mt-4 grid gap-10 lg:grid-cols-2">
        <section aria-label="Facts">
          <Facts
            facts={[
              [
                'Notebook',
                <Link key="n" href={`/notebooks/${device.notebook}`}>
                  {device.notebook}
                </Link>,
              ],
              ['Material', device.material],
              ['Lot', device.lot],
              ['Wafer', device.wafer],
              ['Die', device.die],
              ['Dimensions', device.dimensions],
              ['Remarks', device.remarks],
              [
                'Cooldowns',
                device.cooldowns.length === 0
                  ? ''
                  : device.cooldowns.map((c) => (
                      <Link key={c.id} href={`/cooldowns/${c.id}`} className="mr-3">
                        {c.name}
                      </Link>
                    )),
              ],
            ]}
          />
        </section>
        <section>
          <h2>Gates</h2>
          {device.gates.length === 0 ? (
            <p className="text-quiet">No gate is entered.</p>
          ) : (
            <div className="relative overflow-x-auto" tabIndex={0} role="region" aria-label="Gates">
              <table className="table-plain">
                <thead>
                  <tr>
                    <th scope="col">Name</th>
                    <th scope="col">Purpose</th>
                    <th scope="col" className="!text-right">
                      Width / nm
                    </th>
                    <th scope="col" className="!text-right">
                      Length / nm
                    </th>
                  </tr>
                </thead>
                <tbody>
                  {device.gates.map((gate) => (
                    <tr key={gate.name}>
                      <td>{gate.name}</td>
                      <td>{gate.purpose}</td>
                      <td className="figures !text-right">{gate.widthNm}</td>
                      <td className="figures !text-right">{gate.lengthNm}</td>
                    </tr>
                  ))}
                </tbody>
              </table>
            </div>
          )}
        </section>
      </div>
      <section className="mt-10">
        <h2>Entries on this device</h2>
        <Suspense>
          <EntryTable
            entries={entries}
            caption="Entries on this device"
            empty="No entry names this device yet."
            withNotebook
          />
        </Suspense>
      </section>
      {notebook.role === 'lead' || notebook.role === 'author' ? (
        <details className="mt-8 max-w-3xl">
          <summary className="press cursor-pointer list-none">Change the device</summary>
          <DeviceForm code={device.notebook} device={device} />
        </details>
      ) : null}
    </>
  );
}
