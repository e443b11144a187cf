'use client';

import Link from 'next/link';
import useSWR from 'swr';
import type { ReactNode } from 'react';
import type { TraceNodeAttributes } from '@/lib/document/attributes';
import type { BlockStamps, EntryDto } from '@/lib/schemas/entry';
import { useResult, useSheet, useTrace, type Focus } from '@/components/editor/sheet-context/context';
import { showBlock, type SheetText } from '@/components/entry/sheet-text';
import { request } from '@/components/hooks/request';
import { BlockProvenance } from './block-provenance';
import { TraceProvenance } from './trace-provenance';
import { ValueProvenance } from './value-provenance';

type Props = {
  entry: EntryDto;
  text: SheetText;
  stamps: BlockStamps;
  written: Record<string, string>;
  names: Record<string, string>;
  /** Given to the author of a draft. */
  onSign?: () => void;
  children?: ReactNode;
};

/** The column at the right that follows the cursor: a value, a trace, or the block it stands in. */
export function ProvenanceColumn({ entry, text, stamps, written, names, onSign, children }: Props) {
  const { focus } = useSheet();
  return (
    <aside className="provenance" aria-label="Provenance">
      {focus?.kind === 'value' ? <OfValue text={text} focus={focus} /> : null}
      {focus?.kind === 'trace' ? <OfTrace text={text} focus={focus} /> : null}
      {focus?.blockId ? (
        <BlockProvenance stamp={stamps[focus.blockId]} written={written[focus.blockId]} names={names} />
      ) : null}
      {!focus ? (
        <p className="provenance-hint text-quiet">Choose a value, a trace or a paragraph to see where it comes from.</p>
      ) : null}
      <ToCountersign entry={entry} onSign={onSign} />
      {children}
    </aside>
  );
}

function OfValue({ text, focus }: { text: SheetText; focus: Focus }) {
  const { store, setFocus } = useSheet();
  const result = useResult(focus.id);
  const source = String(text.attributes(focus.id)?.source ?? focus.quote);
  if (!result)
    return <p className="text-quiet">{source === '' ? 'An empty value.' : 'This value has no result yet.'}</p>;
  const jump = (symbol: string) => {
    const stem = symbol.split('.')[0] ?? '';
    const definition = store.results().find((other) => other.symbol === symbol);
    const traceId = text.traceNamed(stem);
    const id = definition?.id ?? traceId;
    if (!id) return;
    setFocus({ kind: definition ? 'value' : 'trace', id, blockId: definition ? null : traceId, quote: symbol });
    showBlock(id);
  };
  return <ValueProvenance result={result} source={source} onJump={jump} />;
}

function OfTrace({ text, focus }: { text: SheetText; focus: Focus }) {
  const attributes = text.attributes(focus.id) as TraceNodeAttributes | null;
  const file = useTrace(attributes?.traceId ?? '');
  if (!attributes) return null;
  return <TraceProvenance node={attributes} file={file} />;
}

/** Reads the entry again while it waits: what has been seen and asked changes under the reader's eyes. */
function useStanding(entry: EntryDto, waits: boolean): EntryDto {
  const { data } = useSWR(waits ? `/api/entries/${entry.id}` : null, (url: string) => request<EntryDto>('GET', url), {
    fallbackData: entry,
    revalidateOnMount: true,
    refreshInterval: 4000,
  });
  return data ?? entry;
}

function ToCountersign({ entry: first, onSign }: { entry: EntryDto; onSign?: () => void }) {
  const waits = first.state === 'signed' && (first.may.countersign || first.countersignObstacle !== null);
  const entry = useStanding(first, waits);
  if (!waits && !entry.may.sign) return null;
  return (
    <section>
      <h2>{waits ? 'To countersign' : 'To sign'}</h2>
      {waits ? (
        <p>
          {entry.seen.traces} of {entry.seen.of} {entry.seen.of === 1 ? 'trace' : 'traces'} seen.
        </p>
      ) : null}
      {waits && entry.countersignObstacle ? <p>{entry.countersignObstacle}</p> : null}
      {!waits && entry.late ? (
        <p>
          The work was {entry.late.days} days ago; the laboratory’s limit is {entry.late.limit}. Signing asks for the
          reason.
        </p>
      ) : null}
      {waits && !entry.countersignObstacle ? (
        <Link className="press press-main" href={`/entries/${entry.id}/countersign`}>
          Countersign
        </Link>
      ) : null}
      {!waits && onSign ? (
        <button type="button" className="press press-main" onClick={onSign}>
          Sign
        </button>
      ) : null}
    </section>
  );
}
