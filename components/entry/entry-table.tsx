'use client';

import Link from 'next/link';
import { DataTable, type Column } from '@/components/ui/data-table';
import { Stair } from '@/components/ui/stair';
import type { EntryState } from '@/lib/schemas/entry';

export type EntryRow = {
  id: string;
  notebook: string;
  leaf: number;
  title: string;
  workDate: string;
  state: EntryState;
  author: { name: string };
  cooldown: string | null;
  devices: string[];
  versions: number;
  openQuestions: number;
};

/** Entries as a table of leaves; `withNotebook` where they come from several. */
export function EntryTable({
  entries,
  caption,
  empty,
  withNotebook = false,
}: {
  entries: EntryRow[];
  caption: string;
  empty: string;
  withNotebook?: boolean;
}) {
  const columns: Column<EntryRow>[] = [
    ...(withNotebook ? [{ key: 'notebook', title: 'Notebook', value: (row: EntryRow) => row.notebook }] : []),
    { key: 'leaf', title: 'Leaf', value: (row) => row.leaf, numeric: true },
    {
      key: 'title',
      title: 'Title',
      value: (row) => row.title,
      cell: (row) => (
        <Link href={`/entries/${row.id}`} className="block min-w-40">
          {row.title}
        </Link>
      ),
    },
    {
      key: 'date',
      title: 'Work of',
      value: (row) => row.workDate,
      cell: (row) => <span className="figures whitespace-nowrap">{row.workDate}</span>,
    },
    { key: 'state', title: 'State', value: (row) => row.state, cell: (row) => <Stair state={row.state} /> },
    { key: 'author', title: 'Author', value: (row) => row.author.name },
    { key: 'cooldown', title: 'Cooldown', value: (row) => row.cooldown },
    { key: 'devices', title: 'Devices', value: (row) => row.devices.join(', ') },
    { key: 'questions', title: 'Open questions', value: (row) => row.openQuestions, numeric: true },
  ];
  return (
    <DataTable
      caption={caption}
      rows={entries}
      columns={columns}
      rowKey={(row) => row.id}
      empty={empty}
      fileName="entries"
    />
  );
}
