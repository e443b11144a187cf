'use client';

import Link from 'next/link';
import { DataTable, type Column } from '@/components/ui/data-table';
import type { DeviceLine } from '@/lib/schemas/laboratory';

const columns: Column<DeviceLine>[] = [
  {
    key: 'name',
    title: 'Device',
    value: (row) => row.name,
    cell: (row) => <Link href={`/devices/${row.id}`}>{row.name}</Link>,
  },
  { key: 'material', title: 'Material', value: (row) => row.material },
  { key: 'gates', title: 'Gates', value: (row) => row.gates, numeric: true },
  { key: 'cooldowns', title: 'Cooldowns', value: (row) => row.cooldowns, numeric: true },
  { key: 'entries', title: 'Entries', value: (row) => row.entries, numeric: true },
  { key: 'notebook', title: 'Notebook', value: (row) => row.notebook },
];

export function DeviceTable({ devices }: { devices: DeviceLine[] }) {
  return (
    <DataTable
      caption="Devices"
      rows={devices}
      columns={columns}
      rowKey={(row) => row.id}
      empty="No device is entered yet."
      fileName="devices"
    />
  );
}
