'use client';

import { useMemo, useState } from 'react';
import { serverProvider } from '@/components/plot/provider';
import { firstView, TracePlot } from '@/components/plot/trace-plot';
import type { TraceNodeAttributes, TraceView } from '@/lib/document/attributes';
import type { TraceDto } from '@/lib/schemas/entry';

/** The plot of a trace at full width. Looking closer here changes nothing in the entry. */
export function TracePage({ trace, words }: { trace: TraceDto; words: TraceNodeAttributes | null }) {
  const columns = useMemo(
    () =>
      trace.columns.map((column, index) => ({
        symbol: words?.settings.columns[index]?.symbol ?? column.symbol,
        unit: words?.settings.columns[index]?.unit ?? column.unit,
        min: column.min,
        max: column.max,
      })),
    [trace, words],
  );
  const provider = useMemo(() => serverProvider(trace.id, trace.rows, columns), [trace, columns]);
  const [view, setView] = useState<TraceView>(() => startingView(words, columns));
  return (
    <TracePlot
      title={`${words?.handle ?? ''} ${trace.fileName}`.trim()}
      fileName={trace.fileName}
      provider={provider}
      view={view}
      onView={setView}
      spans={words?.spans ?? []}
      height={460}
      toolsOpen
    />
  );
}

/** The view of the text where its columns are in the file; derived columns live in the entry only. */
function startingView(words: TraceNodeAttributes | null, columns: { symbol: string }[]): TraceView {
  const inFile = (symbol: string) => columns.some((column) => column.symbol === symbol);
  if (words && (words.view.x === null || inFile(words.view.x)) && words.view.y.length > 0 && words.view.y.every(inFile))
    return words.view;
  return firstView(columns);
}
