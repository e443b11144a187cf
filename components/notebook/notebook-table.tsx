'use client';

import Link from 'next/link';
import { DataTable, type Column } from '@/components/ui/data-table';

type Row = {
  code: string;
  title: string;
  role: string;
  leaves: number;
  drafts: number;
  waiting: number;
  lastWork: string | null;
};

const columns: Column<Row>[] = [
  {
    key: 'code',
    title: 'Code',
    value: (row) => row.code,
    cell: (row) => <span className="figures whitespace-nowrap">{row.code}</span>,
  },
  {
    key: 'title',
    title: 'Title',
    value: (row) => row.title,
    cell: (row) => <Link href={`/notebooks/${row.code}`}>{row.title}</Link>,
  },
  { key: 'role', title: 'My role', value: (row) => row.role },
  { key: 'leaves', title: 'Leaves', value: (row) => row.leaves, numeric: true },
  { key: 'drafts', title: 'Being written', value: (row) => row.drafts, numeric: true },
  { key: 'waiting', title: 'To countersign', value: (row) => row.waiting, numeric: true },
  {
    key: 'last',
    title: 'Last work',
    value: (row) => row.lastWork,
    cell: (row) => <span className="figures whitespace-nowrap">{row.lastWork}</span>,
  },
];

export function NotebookTable({ notebooks }: { notebooks: Row[] }) {
  return (
    <DataTable
      caption="Notebooks"
      rows={notebooks}
      columns={columns}
      rowKey={(row) => row.code}
      empty="You are a member of no notebook yet. Begin one, or ask a lead to add you."
      fileName="notebooks"
    />
  );
}
