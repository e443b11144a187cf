'use client';

import Link from 'next/link';
import { DataTable, type Column } from '@/components/ui/data-table';

type Row = {
  seq: number;
  at: string;
  kind: string;
  actor: string;
  entryId: string | null;
  detail: Record<string, unknown>;
};

const detailText = (row: Row) =>
  Object.entries(row.detail)
    .map(
      ([key, value]) =>
        `${key} ${typeof value === 'string' && value.length === 64 ? value.slice(0, 12) : JSON.stringify(value)}`,
    )
    .join(', ');

const columns: Column<Row>[] = [
  { key: 'seq', title: 'No.', value: (row) => row.seq, numeric: true },
  {
    key: 'at',
    title: 'When (UTC)',
    value: (row) => row.at,
    cell: (row) => <span className="figures whitespace-nowrap">{row.at.slice(0, 19).replace('T', ' ')}</span>,
  },
  { key: 'actor', title: 'Who', value: (row) => row.actor },
  { key: 'kind', title: 'What', value: (row) => row.kind },
  {
    key: 'entry',
    title: 'Entry',
    value: (row) => row.entryId,
    cell: (row) => (row.entryId ? <Link href={`/entries/${row.entryId}`}>open</Link> : null),
  },
  {
    key: 'detail',
    title: 'Detail',
    value: detailText,
    cell: (row) => <span className="figures break-all text-sm">{detailText(row)}</span>,
  },
];

export function AuditTable({ records }: { records: Row[] }) {
  return (
    <DataTable
      caption="Audit trail"
      rows={records}
      columns={columns}
      rowKey={(row) => String(row.seq)}
      empty="Nothing has happened yet."
      fileName="audit-trail"
    />
  );
}
