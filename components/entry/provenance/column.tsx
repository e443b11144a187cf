'use client';

import type { Editor } from '@tiptap/core';
import type { Node as ProseMirrorNode } from '@tiptap/pm/model';
import Link from 'next/link';
import { useEffect, useState, type ReactNode } from 'react';
import type { TraceNodeAttributes } from '@/lib/document/attributes';
import type { BlockStamps, EntryDto } from '@/lib/schemas/entry';
import { useResult, useSheet, useTrace, type Focus } from '@/components/editor/sheet-context/context';
import { request } from '@/components/hooks/request';
import { BlockProvenance } from './block-provenance';
import { TraceProvenance } from './trace-provenance';
import { ValueProvenance } from './value-provenance';

type Props = {
  entry: EntryDto;
  editor: Editor | null;
  stamps: BlockStamps;
  written: Record<string, string>;
  names: Record<string, string>;
  /** Given to the author of a draft. */
  onSign?: () => void;
  children?: ReactNode;
};

/** The column at the right that follows the cursor: a value, a trace, or the block it stands in. */
export function ProvenanceColumn({ entry, editor, stamps, written, names, onSign, children }: Props) {
  const { focus } = useSheet();
  return (
    <aside className="provenance" aria-label="Provenance">
      {focus?.kind === 'value' ? <OfValue editor={editor} focus={focus} /> : null}
      {focus?.kind === 'trace' ? <OfTrace editor={editor} focus={focus} /> : null}
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

export function nodeById(editor: Editor | null, id: string): ProseMirrorNode | null {
  let found: ProseMirrorNode | null = null;
  editor?.state.doc.descendants((node) => {
    if (node.attrs.id === id) found = node;
    return found === null && !node.isAtom;
  });
  return found;
}

function OfValue({ editor, focus }: { editor: Editor | null; focus: Focus }) {
  const { store, setFocus } = useSheet();
  const result = useResult(focus.id);
  const node = nodeById(editor, focus.id);
  const source = String(node?.attrs.source ?? focus.quote);
  if (!result)
    return <p className="text-quiet">{source === '' ? 'An empty value.' : 'This value has no result yet.'}</p>;
  const jump = (symbol: string) => {
    const stem = symbol.split('.')[0];
    const definition = store.results().find((other) => other.symbol === symbol);
    let traceId: string | null = null;
    editor?.state.doc.forEach((block) => {
      if (block.type.name === 'trace' && block.attrs.handle === stem) traceId = String(block.attrs.id);
    });
    const id = definition?.id ?? traceId;
    if (!id) return;
    setFocus({ kind: definition ? 'value' : 'trace', id, blockId: definition ? null : traceId, quote: symbol });
    editor?.view.dom.querySelector(`[data-id="${CSS.escape(id)}"]`)?.scrollIntoView({ block: 'nearest' });
  };
  return <ValueProvenance result={result} source={source} onJump={jump} />;
}

function OfTrace({ editor, focus }: { editor: Editor | null; focus: Focus }) {
  const node = nodeById(editor, focus.id);
  const file = useTrace(String(node?.attrs.traceId ?? ''));
  if (!node) return null;
  return <TraceProvenance node={node.attrs as TraceNodeAttributes} file={file} />;
}

type Obstacle = Pick<EntryDto, 'seen' | 'countersignObstacle'>;
const askAgainMs = 1500;
/** After that a reload asks; a page left open does not ask for ever. */
const longestAsked = 40;

/** What still stands before a countersignature. The traces are served while the page is read, so it is asked for again until all are. */
function useObstacle(entry: EntryDto): Obstacle {
  const [now, setNow] = useState<Obstacle>(entry);
  useEffect(() => setNow(entry), [entry]);
  const unseen = entry.state === 'signed' && now.seen.traces < now.seen.of;
  useEffect(() => {
    if (!unseen) return;
    let asked = 0;
    const timer = setInterval(() => {
      if (document.visibilityState === 'hidden' || asked >= longestAsked) return;
      asked += 1;
      request<Obstacle>('GET', `/api/entries/${encodeURIComponent(entry.id)}`).then(
        setNow,
        () => undefined, // What stands there stays true as of then; the server decides when it is signed.
      );
    }, askAgainMs);
    return () => clearInterval(timer);
  }, [unseen, entry.id]);
  return now;
}

function ToCountersign({ entry, onSign }: { entry: EntryDto; onSign?: () => void }) {
  const { seen, countersignObstacle } = useObstacle(entry);
  const waits = entry.state === 'signed' && (entry.may.countersign || countersignObstacle !== null);
  if (!waits && !entry.may.sign) return null;
  return (
    <section>
      <h2>{waits ? 'To countersign' : 'To sign'}</h2>
      {waits ? (
        <p>
          {seen.traces} of {seen.of} {seen.of === 1 ? 'trace' : 'traces'} seen.
        </p>
      ) : null}
      {waits && countersignObstacle ? <p>{countersignObstacle}</p> : null}
      {!waits && entry.late ? (
        <p>
          The work was {entry.late.days} days ago; the laboratory’s limit is {entry.late.limit}. Signing asks for the
          reason.
        </p>
      ) : null}
      {waits && !countersignObstacle ? (
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
