'use client';

import { useMemo, useState, type ReactNode } from 'react';
import { useSheet, useTrace } from '@/components/editor/sheet-context/context';
import { withPromised } from '@/components/plot/derived-provider';
import { TracePlot } from '@/components/plot/trace-plot';
import { TraceFoot } from '@/components/trace/trace-foot';
import { traceProvider } from '@/components/trace/trace-provider';
import type { TraceNodeAttributes } from '@/lib/document/attributes';
import type { TraceDto } from '@/lib/schemas/entry';
import { useVersion } from './version-context';

type Props = {
  attributes: TraceNodeAttributes;
  /** Columns that values of the version have made from this trace, by their name within it (`P` of `t1.P`). */
  derived: { symbol: string; unit: string | null }[];
  /** What the author says of it. */
  children: ReactNode;
};

/** A trace of a version: its plot, what its author says of it, and its file. */
export function ReadingTrace({ attributes, derived, children }: Props) {
  const { id, traceId, handle } = attributes;
  const file = useTrace(traceId);
  const { focus, setFocus } = useSheet();
  const choose = () => setFocus({ kind: 'trace', id, blockId: id, quote: handle });
  return (
    <section
      className={`trace ${focus?.id === id ? 'chosen' : ''}`}
      data-id={id}
      aria-label={`trace ${handle}`}
      onClick={choose}
      onFocusCapture={choose}
    >
      {file?.state === 'unreadable' ? <p className="text-error">{file.problem}</p> : null}
      {file?.state === 'parsed' ? (
        <>
          <BoundPlot attributes={attributes} file={file} derived={derived} />
          {children}
        </>
      ) : null}
      <TraceFoot handle={handle} file={file} />
    </section>
  );
}

function BoundPlot({ attributes, file, derived }: Omit<Props, 'children'> & { file: TraceDto }) {
  const { handle, settings, spans } = attributes;
  const [view, setView] = useState(attributes.view);
  const { columns } = useVersion();
  const provider = useMemo(
    () =>
      withPromised(traceProvider(file, settings.columns), derived, async () => {
        const made = await columns();
        return derived.map(({ symbol }) => {
          const column = made.get(`${handle}.${symbol}`);
          if (column) return { symbol, unit: column.unit, values: column.values };
          throw new Error(
            `The samples of ${handle}.${symbol} could not be calculated again in this browser; its result stands in the text as it was bound.`,
          );
        });
      }),
    [file, settings.columns, derived, columns, handle],
  );
  return (
    <TracePlot
      title={`${handle}, ${file.fileName}`}
      fileName={file.fileName}
      provider={provider}
      view={view}
      onView={setView}
      spans={spans}
    />
  );
}
