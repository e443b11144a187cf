'use client';

import Link from 'next/link';
import { DataTable, type Column } from '@/components/ui/data-table';
import type { CooldownLine } from '@/lib/schemas/laboratory';

const columns: Column<CooldownLine>[] = [
  {
    key: 'name',
    title: 'Cooldown',
    value: (row) => row.name,
    cell: (row) => <Link href={`/cooldowns/${row.id}`}>{row.name}</Link>,
  },
  { key: 'cryostat', title: 'Cryostat', value: (row) => row.cryostat },
  {
    key: 'start',
    title: 'Start',
    value: (row) => row.startedOn,
    cell: (row) => <span className="figures whitespace-nowrap">{row.startedOn}</span>,
  },
  {
    key: 'end',
    title: 'End',
    value: (row) => row.endedOn,
    cell: (row) => (row.endedOn ? <span className="figures whitespace-nowrap">{row.endedOn}</span> : 'running'),
  },
  { key: 'base', title: 'Base temperature', value: (row) => row.baseTemperature },
  { key: 'devices', title: 'Devices', value: (row) => row.devices.join(', ') },
  { key: 'entries', title: 'Entries', value: (row) => row.entries, numeric: true },
  { key: 'notebook', title: 'Notebook', value: (row) => row.notebook },
];

export function CooldownTable({ cooldowns }: { cooldowns: CooldownLine[] }) {
  return (
    <DataTable
      caption="Cooldowns"
      rows={cooldowns}
      columns={columns}
      rowKey={(row) => row.id}
      empty="No cooldown is entered yet."
      fileName="cooldowns"
    />
  );
}
