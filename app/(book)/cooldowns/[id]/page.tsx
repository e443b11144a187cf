import type { Metadata } from 'next';
import Link from 'next/link';
import { Suspense } from 'react';
import { CooldownForm } from '@/components/cooldown/cooldown-form';
import { EntryTable } from '@/components/entry/entry-table';
import { Facts } from '@/components/ui/facts';
import { pageAccess } from '@/server/access/page';
import { readCooldown } from '@/server/cooldowns/service';
import { listDevices } from '@/server/devices/service';
import { listEntries } from '@/server/entries/reading-service';

export const metadata: Metadata = { title: 'Cooldown' };

export default async function CooldownPage({ params }: { params: Promise<{ id: string }> }) {
  const { id } = await params;
  const { person, notebook } = await pageAccess('cooldown.read', id, `/cooldowns/${id}`);
  const cooldown = await readCooldown(id);
  const entries = await listEntries(person.id, { cooldownId: id });
  const writes = notebook.role === 'lead' || notebook.role === 'author';
  const devices = writes ? await listDevices(person.id, notebook.id) : [];
  return (
    <>
      <p>
        <Link href="/cooldowns">Cooldowns</Link>
      </p>
      <h1>{cooldown.name}</h1>
      <section aria-label="Facts" className="mt-4 max-w-3xl">
        <Facts
          facts={[
            [
              'Notebook',
              <Link key="n" href={`/notebooks/${cooldown.notebook}`}>
                {cooldown.notebook}
              </Link>,
            ],
            ['Cryostat', cooldown.cryostat],
            [
              'From',
              <span key="s" className="figures">
                {cooldown.startedOn}
              </span>,
            ],
            [
              'To',
              cooldown.endedOn ? (
                <span key="e" className="figures">
                  {cooldown.endedOn}
                </span>
              ) : (
                'running'
              ),
            ],
            ['Base temperature', cooldown.baseTemperature],
            [
              'Devices',
              cooldown.devices.length === 0
                ? ''
                : cooldown.devices.map((d) => (
                    <Link key={d.id} href={`/devices/${d.id}`} className="mr-3">
                      {d.name}
                    </Link>
                  )),
            ],
            ['Remarks', cooldown.remarks],
          ]}
        />
      </section>
      <section className="mt-8">
        <h2>Lines</h2>
        {cooldown.lines.length === 0 ? (
          <p className="text-quiet">No line is entered.</p>
        ) : (
          <div className="relative overflow-x-auto" tabIndex={0} role="region" aria-label="Lines">
            <table className="table-plain">
              <thead>
                <tr>
                  {['Line', 'Gate or contact', 'Attenuation', 'Filter', 'Bias tee', 'Instrument'].map((title) => (
                    <th key={title} scope="col">
                      {title}
                    </th>
                  ))}
                </tr>
              </thead>
              <tbody>
                {cooldown.lines.map((line, index) => (
                  <tr key={index}>
                    <td>{line.name}</td>
                    <td>{line.contact}</td>
                    <td>{line.attenuation}</td>
                    <td>{line.filter}</td>
                    <td>{line.biasTee}</td>
                    <td>{line.instrument}</td>
                  </tr>
                ))}
              </tbody>
            </table>
          </div>
        )}
      </section>
      <section className="mt-8">
        <h2>Entries of this cooldown</h2>
        <Suspense>
          <EntryTable
            entries={entries}
            caption="Entries of this cooldown"
            empty="No entry belongs to this cooldown yet."
            withNotebook
          />
        </Suspense>
      </section>
      {writes ? (
        <details className="mt-8 max-w-3xl">
          <summary className="press cursor-pointer list-none">Change the cooldown</summary>
          <CooldownForm
            code={cooldown.notebook}
            cooldown={cooldown}
            devices={devices.map(({ id: deviceId, name }) => ({ id: deviceId, name }))}
          />
        </details>
      ) : null}
    </>
  );
}
