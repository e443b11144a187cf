import type { Metadata } from 'next';
import { CooldownForm } from '@/components/cooldown/cooldown-form';
import { pageAccess } from '@/server/access/page';
import { listDevices } from '@/server/devices/service';

export const metadata: Metadata = { title: 'New cooldown' };

export default async function NewCooldownPage({ params }: { params: Promise<{ code: string }> }) {
  const { code } = await params;
  const { notebook, person } = await pageAccess('cooldown.create', code, `/notebooks/${code}/new-cooldown`);
  const devices = await listDevices(person.id, notebook.id);
  return (
    <section className="max-w-3xl">
      <p className="figures text-quiet">{code}</p>
      <h1>New cooldown</h1>
      <CooldownForm code={code} devices={devices.map(({ id, name }) => ({ id, name }))} />
    </section>
  );
}
