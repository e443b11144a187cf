'use client';

import { useEffect, useMemo, useRef, useState } from 'react';
import { withDerived, type DerivedValues } from '@/components/plot/derived-provider';
import { TracePlot } from '@/components/plot/trace-plot';
import { Facts } from '@/components/ui/facts';
import type { TraceNodeAttributes, TraceSettings } from '@/lib/document/attributes';
import type { TraceDto } from '@/lib/schemas/entry';
import { settingsProblems } from './first-settings';
import { stated } from './stated';
import { TraceDetails } from './trace-details';
import { traceProvider } from './trace-provider';
import { TraceSettingsForm } from './trace-settings-form';

type Attributes = Pick<TraceNodeAttributes, 'traceId' | 'handle' | 'settings' | 'spans' | 'view'>;

type Props = {
  attributes: Attributes;
  file: TraceDto;
  derived: DerivedValues[];
  /** Left out where the trace is only read. */
  onAttributes?: (part: Partial<Pick<Attributes, 'settings' | 'spans' | 'view'>>) => void;
};

/** Zooming changes the view many times a second; the document gets the last one. */
const restMs = 700;

/** A received trace: its plot with named spans, and what its author says of it. */
export function TracePanel({ attributes, file, derived, onAttributes }: Props) {
  const { handle, settings, spans } = attributes;
  const [view, setView] = useState(attributes.view);
  const write = useRef(onAttributes);
  useEffect(() => {
    write.current = onAttributes;
  });
  const stored = JSON.stringify(attributes.view);
  const own = useRef(stored);
  useEffect(() => {
    // Changed from outside: another window's text was taken over.
    if (own.current !== stored) setView(JSON.parse(stored) as Attributes['view']);
    own.current = stored;
  }, [stored]);
  useEffect(() => {
    const text = JSON.stringify(view);
    if (text === own.current) return;
    const timer = setTimeout(() => {
      own.current = text;
      write.current?.({ view });
    }, restMs);
    return () => clearTimeout(timer);
  }, [view]);

  const provider = useMemo(
    () => withDerived(traceProvider(file, settings.columns), derived),
    [file, settings.columns, derived],
  );

  const problems = settingsProblems(settings);
  const open = Object.keys(problems).length;
  const change = (next: TraceSettings) => {
    const rename = renaming(settings, next);
    const renamed = { ...view, x: view.x && rename(view.x), y: view.y.map(rename) };
    setView(renamed);
    own.current = JSON.stringify(renamed);
    onAttributes?.({
      settings: next,
      view: renamed,
      spans: spans.map((span) => ({ ...span, axis: rename(span.axis) })),
    });
  };
  return (
    <>
      <TracePlot
        title={`${handle}, ${file.fileName}`}
        fileName={file.fileName}
        provider={provider}
        view={view}
        onView={setView}
        spans={spans}
        onSpans={onAttributes && ((next) => onAttributes({ spans: next }))}
      />
      <TraceDetails handle={handle} open={open} unfold={open > 0 && onAttributes !== undefined}>
        {onAttributes ? (
          <TraceSettingsForm settings={settings} onChange={change} problems={problems} />
        ) : (
          <Facts facts={stated(settings)} />
        )}
      </TraceDetails>
    </>
  );
}

/** Follows a column whose symbol was changed. */
function renaming(before: TraceSettings, after: TraceSettings): (symbol: string) => string {
  return (symbol) => {
    const index = before.columns.findIndex((column) => column.symbol === symbol);
    return index < 0 ? symbol : (after.columns[index]?.symbol ?? symbol);
  };
}
