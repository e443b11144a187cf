'use client';

import Link from 'next/link';
import { DataTable, type Column } from '@/components/ui/data-table';

type Row = {
  id: string;
  notebook: string;
  leaf: number;
  title: string;
  workDate: string;
  author: { name: string };
  signedAt: string | null;
  asked: boolean;
  openQuestions: number;
};

const columns: Column<Row>[] = [
  {
    key: 'place',
    title: 'Leaf',
    value: (row) => `${row.notebook} ${row.leaf}`,
    cell: (row) => <span className="figures whitespace-nowrap">{`${row.notebook} ${row.leaf}`}</span>,
  },
  {
    key: 'title',
    title: 'Title',
    value: (row) => row.title,
    cell: (row) => <Link href={`/entries/${row.id}`}>{row.title}</Link>,
  },
  { key: 'author', title: 'Author', value: (row) => row.author.name },
  {
    key: 'date',
    title: 'Work of',
    value: (row) => row.workDate,
    cell: (row) => <span className="figures whitespace-nowrap">{row.workDate}</span>,
  },
  {
    key: 'signed',
    title: 'Signed',
    value: (row) => row.signedAt,
    cell: (row) => <span className="figures whitespace-nowrap">{row.signedAt?.slice(0, 10)}</span>,
  },
  { key: 'asked', title: 'Asked', value: (row) => (row.asked ? 'you' : 'anyone') },
  { key: 'questions', title: 'Open questions', value: (row) => row.openQuestions, numeric: true },
];

export function QueueTable({ lines }: { lines: Row[] }) {
  return (
    <DataTable
      caption="Entries to countersign"
      rows={lines}
      columns={columns}
      rowKey={(row) => row.id}
      empty="Nothing waits for a countersignature of yours."
      fileName="countersign"
    />
  );
}
