'use client';

import { useVirtualizer } from '@tanstack/react-virtual';
import { usePathname, useSearchParams } from 'next/navigation';
import { useMemo, useRef, useState, type ReactNode } from 'react';
import { csvRow } from '@/lib/trace-format/csv-writer';
import {
  compareCells,
  readTableState,
  rowMatches,
  writeTableState,
  type CellValue,
  type TableState,
} from './table-state';

export type Column<Row> = {
  key: string;
  title: string;
  /** What sorts, filters and is copied. */
  value: (row: Row) => CellValue;
  /** What is shown; the value where left out. */
  cell?: (row: Row) => ReactNode;
  numeric?: boolean;
};

type Props<Row> = {
  caption: string;
  rows: Row[];
  columns: Column<Row>[];
  rowKey: (row: Row) => string;
  /** Said instead of an empty table. */
  empty: ReactNode;
  fileName: string;
};

const virtualFrom = 150;
const rowHeight = 41;

/** A table that sorts, filters, hides columns and keeps all that in the address; copies as TSV, downloads as CSV. */
export function DataTable<Row>({ caption, rows, columns, rowKey, empty, fileName }: Props<Row>) {
  const [state, setState] = useTableState();
  const shownColumns = columns.filter((column) => !state.hidden.includes(column.key));
  const shownRows = useMemo(() => {
    const kept = state.filter.trim()
      ? rows.filter((row) =>
          rowMatches(
            columns.map((c) => c.value(row)),
            state.filter.trim(),
          ),
        )
      : rows;
    const by = columns.find((column) => column.key === state.sort);
    return by ? [...kept].sort((a, b) => compareCells(by.value(a), by.value(b), state.descending)) : kept;
  }, [rows, columns, state.filter, state.sort, state.descending]);

  if (rows.length === 0) return <p className="py-4 text-quiet">{empty}</p>;
  return (
    <div>
      <div className="relative my-3 flex flex-wrap items-end gap-3">
        <label className="grow sm:max-w-xs">
          <span className="text-sm text-quiet">Filter</span>
          <input
            className="field"
            type="search"
            value={state.filter}
            onChange={(event) => setState({ ...state, filter: event.target.value })}
          />
        </label>
        <details className="sm:relative">
          <summary className="press cursor-pointer list-none">Columns</summary>
          <fieldset className="absolute inset-x-0 z-10 mt-1 min-w-40 border sm:inset-x-auto border-edge bg-sheet p-3">
            <legend className="sr-only">Columns to show</legend>
            {columns.map((column) => (
              <label key={column.key} className="flex min-h-7 items-center gap-2">
                <input
                  type="checkbox"
                  checked={!state.hidden.includes(column.key)}
                  onChange={(event) =>
                    setState({
                      ...state,
                      hidden: event.target.checked
                        ? state.hidden.filter((key) => key !== column.key)
                        : [...state.hidden, column.key],
                    })
                  }
                />
                {column.title}
              </label>
            ))}
          </fieldset>
        </details>
        <Export columns={shownColumns} rows={shownRows} fileName={fileName} />
        <p role="status" className="pb-2 text-sm text-quiet">
          {shownRows.length === rows.length ? `${rows.length} rows` : `${shownRows.length} of ${rows.length} rows`}
        </p>
      </div>
      <Body
        caption={caption}
        columns={shownColumns}
        rows={shownRows}
        rowKey={rowKey}
        state={state}
        onState={setState}
      />
    </div>
  );
}

function useTableState(): [TableState, (next: TableState) => void] {
  const query = useSearchParams();
  const path = usePathname();
  const [state, setState] = useState(() => readTableState(new URLSearchParams(query)));
  const set = (next: TableState) => {
    setState(next);
    const text = writeTableState(next);
    window.history.replaceState(null, '', text ? `${path}?${text}` : path);
  };
  return [state, set];
}

function Export<Row>({ columns, rows, fileName }: { columns: Column<Row>[]; rows: Row[]; fileName: string }) {
  const [said, setSaid] = useState('');
  const table = () => [columns.map((c) => c.title), ...rows.map((row) => columns.map((c) => c.value(row)))];
  const copy = async () => {
    const text = table()
      .map((line) => line.map((cell) => String(cell ?? '').replace(/[\t\n\r]+/g, ' ')).join('\t'))
      .join('\n');
    await navigator.clipboard.writeText(text);
    setSaid(`${rows.length} rows copied`);
  };
  const download = () => {
    const link = document.createElement('a');
    link.href = URL.createObjectURL(new Blob([table().map(csvRow).join('')], { type: 'text/csv' }));
    link.download = `${fileName}.csv`;
    link.click();
    URL.revokeObjectURL(link.href);
  };
  return (
    <>
      <button type="button" className="press" onClick={() => void copy()}>
        Copy
      </button>
      <button type="button" className="press" onClick={download}>
        CSV
      </button>
      <span role="status" className="sr-only">
        {said}
      </span>
    </>
  );
}

type BodyProps<Row> = Pick<Props<Row>, 'caption' | 'columns' | 'rows' | 'rowKey'> & {
  state: TableState;
  onState: (next: TableState) => void;
};

function Body<Row>({ caption, columns, rows, rowKey, state, onState }: BodyProps<Row>) {
  const scroller = useRef<HTMLDivElement>(null);
  const long = rows.length > virtualFrom;
  const virtual = useVirtualizer({
    count: rows.length,
    getScrollElement: () => scroller.current,
    estimateSize: () => rowHeight,
    overscan: 12,
    enabled: long,
  });
  const items = virtual.getVirtualItems();
  const shown = long ? items.map((item) => rows[item.index]) : rows;
  const before = long ? (items[0]?.start ?? 0) : 0;
  const after = long ? virtual.getTotalSize() - (items[items.length - 1]?.end ?? 0) : 0;
  return (
    // Focusable, so that the keyboard can scroll it.
    <div
      ref={scroller}
      tabIndex={0}
      role="region"
      aria-label={caption}
      className={`relative overflow-auto ${long ? 'max-h-[70vh]' : ''}`}
    >
      <table className="table-plain" aria-rowcount={rows.length + 1}>
        <caption className="sr-only">{caption}</caption>
        <thead className="sticky top-0 bg-ground">
          <tr>
            {columns.map((column) => {
              const sorted = state.sort === column.key;
              return (
                <th
                  key={column.key}
                  scope="col"
                  className={column.numeric ? '!text-right' : ''}
                  aria-sort={sorted ? (state.descending ? 'descending' : 'ascending') : 'none'}
                >
                  <button
                    type="button"
                    className="min-h-[24px] cursor-pointer font-medium hover:text-action"
                    onClick={() =>
                      onState({ ...state, sort: column.key, descending: sorted ? !state.descending : false })
                    }
                  >
                    {column.title}
                    <span aria-hidden="true">{sorted ? (state.descending ? ' ↓' : ' ↑') : ''}</span>
                  </button>
                </th>
              );
            })}
          </tr>
        </thead>
        <tbody>
          {before > 0 ? <tr style={{ height: before }} aria-hidden="true" /> : null}
          {shown.map((row) => (
            <tr key={rowKey(row)} className="hover:bg-tint">
              {columns.map((column) => (
                <td key={column.key} className={column.numeric ? 'figures !text-right' : ''}>
                  {column.cell ? column.cell(row) : column.value(row)}
                </td>
              ))}
            </tr>
          ))}
          {after > 0 ? <tr style={{ height: after }} aria-hidden="true" /> : null}
        </tbody>
      </table>
    </div>
  );
}
