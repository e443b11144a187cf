import type { Metadata } from 'next';
import { NewEntryForm } from '@/components/entry/new-entry-form';
import { pageAccess } from '@/server/access/page';
import { listCooldowns } from '@/server/cooldowns/service';
import { listDevices } from '@/server/devices/service';
import { listLayouts } from '@/server/layouts/service';

export const metadata: Metadata = { title: 'New entry' };

export default async function NewEntryPage({ params }: { params: Promise<{ code: string }> }) {
  const { code } = await params;
  const { notebook, person } = await pageAccess('entry.create', code, `/notebooks/${code}/new`);
  const cooldowns = await listCooldowns(person.id, notebook.id);
  const devices = await listDevices(person.id, notebook.id);
  return (
    <section className="max-w-xl">
      <p className="figures text-quiet">{code}</p>
      <h1>New entry</h1>
      <NewEntryForm
        code={code}
        cooldowns={cooldowns.map(({ id, name, cryostat, endedOn }) => ({
          id,
          name: `${name}, ${cryostat}${endedOn ? ' (ended)' : ''}`,
        }))}
        devices={devices.map(({ id, name }) => ({ id, name }))}
        layouts={await listLayouts(notebook.id)}
      />
    </section>
  );
}
