'use client';

import { useVirtualizer } from '@tanstack/react-virtual';
import { useEffect, useRef, useState } from 'react';
import { axisLabel, sampleText } from '@/lib/plot/axis';
import type { PlotProvider } from './provider';

const pageRows = 200;
/** A browser's element cannot be as tall as a hundred million rows; a part of them is laid out at a time. */
const partRows = 100_000;
const rowHeight = 26;

/** The samples as a table, for those who cannot see a plot; rows are fetched as they come into view. */
export function SampleTable({ provider, caption }: { provider: PlotProvider; caption: string }) {
  const [part, setPart] = useState(0);
  const [pages, setPages] = useState(new Map<number, (number | null)[][]>());
  const [problem, setProblem] = useState<string | null>(null);
  const asked = useRef(new Set<number>());
  const scroller = useRef<HTMLDivElement>(null);
  const first = part * partRows;
  const count = Math.max(0, Math.min(partRows, provider.rows - first));
  const virtual = useVirtualizer({
    count,
    getScrollElement: () => scroller.current,
    estimateSize: () => rowHeight,
    overscan: 20,
  });
  const items = virtual.getVirtualItems();
  const from = items.length ? Math.floor((first + items[0].index) / pageRows) : 0;
  const to = items.length ? Math.floor((first + items[items.length - 1].index) / pageRows) : -1;

  useEffect(() => {
    for (let page = from; page <= to; page += 1) {
      if (asked.current.has(page)) continue;
      asked.current.add(page);
      provider.page(page * pageRows, pageRows).then(
        ({ rows }) => setPages((known) => new Map(known).set(page, rows)),
        (error: unknown) => {
          asked.current.delete(page);
          setProblem(error instanceof Error ? error.message : String(error));
        },
      );
    }
  }, [provider, from, to]);

  const parts = Math.ceil(provider.rows / partRows);
  const before = items[0]?.start ?? 0;
  const after = virtual.getTotalSize() - (items[items.length - 1]?.end ?? 0);
  return (
    <div>
      {parts > 1 ? (
        <label className="flex flex-wrap items-center gap-2 py-1 text-sm">
          Rows
          <select className="field !w-auto" value={part} onChange={(event) => setPart(Number(event.target.value))}>
            {Array.from({ length: parts }, (_, i) => (
              <option key={i} value={i}>
                {i * partRows + 1} to {Math.min(provider.rows, (i + 1) * partRows)}
              </option>
            ))}
          </select>
        </label>
      ) : null}
      {problem ? (
        <p role="alert" className="text-error">
          {problem}
        </p>
      ) : null}
      <div
        ref={scroller}
        tabIndex={0}
        role="region"
        aria-label={caption}
        className="max-h-80 overflow-auto border border-rule"
      >
        <table className="table-plain figures text-sm" aria-rowcount={provider.rows + 1}>
          <caption className="sr-only">{caption}</caption>
          <thead className="sticky top-0 bg-ground">
            <tr>
              <th scope="col">row</th>
              {provider.columns.map(({ symbol, unit }) => (
                <th key={symbol} scope="col" className="!text-right">
                  {axisLabel(symbol, unit)}
                </th>
              ))}
            </tr>
          </thead>
          <tbody>
            {before > 0 ? <tr style={{ height: before }} aria-hidden="true" /> : null}
            {items.map(({ index }) => {
              const row = first + index;
              const samples = pages.get(Math.floor(row / pageRows))?.[row % pageRows];
              return (
                <tr key={row} aria-rowindex={row + 2} style={{ height: rowHeight }}>
                  <th scope="row">{row + 1}</th>
                  {provider.columns.map(({ symbol }, i) => (
                    <td key={symbol} className="!text-right whitespace-nowrap">
                      {samples ? cell(samples[i]) : '…'}
                    </td>
                  ))}
                </tr>
              );
            })}
            {after > 0 ? <tr style={{ height: after }} aria-hidden="true" /> : null}
          </tbody>
        </table>
      </div>
    </div>
  );
}

function cell(value: number | null | undefined): string {
  return value === null || value === undefined
    ? 'missing'
    : sampleText(value, 10)
        .replace(/(\.[0-9\u2009]*?)[0\u2009]+$/, '$1')
        .replace(/\.$/, '');
}
