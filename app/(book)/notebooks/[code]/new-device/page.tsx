import type { Metadata } from 'next';
import { DeviceForm } from '@/components/device/device-form';
import { pageAccess } from '@/server/access/page';

export const metadata: Metadata = { title: 'New device' };

export default async function NewDevicePage({ params }: { params: Promise<{ code: string }> }) {
  const { code } = await params;
  await pageAccess('device.create', code, `/notebooks/${code}/new-device`);
  return (
    <section className="max-w-3xl">
      <p className="figures text-quiet">{code}</p>
      <h1>New device</h1>
      <DeviceForm code={code} />
    </section>
  );
}
