'use client';

import { useRouter } from 'next/navigation';
import { useMemo, useState } from 'react';
import useSWR from 'swr';
import { documentDifference, type BlockDifference } from '@/lib/document/difference';
import type { DraftDto, VersionContentDto, VersionDto } from '@/lib/schemas/entry';
import { ErrorSentence } from '@/components/ui/sentence';
import { request } from '@/components/hooks/request';
import { MarkedText } from './compare';
import './entry.css';

type Props = { entryId: string; versions: VersionDto[]; mayRestore: boolean };

const moment = (iso: string) => `${iso.slice(0, 19).replace('T', ' ')} UTC`;

/** The versions of an entry, newest first, and what changed between two of them, readable. */
export function History({ entryId, versions, mayRestore }: Props) {
  const ordered = useMemo(() => [...versions].sort((a, b) => b.seq - a.seq), [versions]);
  const [to, setTo] = useState(ordered[0]?.seq ?? null);
  const [from, setFrom] = useState(ordered[1]?.seq ?? null);
  const [restoring, setRestoring] = useState<number | null>(null);
  const [problem, setProblem] = useState<string | null>(null);
  const router = useRouter();
  if (ordered.length === 0) {
    return (
      <p>No version has been cut yet. One is cut with Ctrl+S, on leaving, after ten idle minutes and at signing.</p>
    );
  }
  const restore = async (version: VersionDto) => {
    setProblem(null);
    setRestoring(version.seq);
    try {
      const base = `/api/entries/${encodeURIComponent(entryId)}`;
      const draft = await request<DraftDto>('GET', `${base}/draft`);
      await request<DraftDto>('POST', `${base}/versions/${version.seq}/restore`, { basedOn: draft.revision });
      router.push(`/entries/${entryId}`);
    } catch (error) {
      setProblem(error instanceof Error ? error.message : 'The version could not be restored; the draft is as it was.');
      setRestoring(null);
    }
  };
  return (
    <div className="history">
      <div className="relative overflow-x-auto" tabIndex={0} role="region" aria-label="Versions">
        <table className="table-plain">
          <caption className="sr-only">Versions</caption>
          <thead>
            <tr>
              <th scope="col">version</th>
              <th scope="col">cut</th>
              <th scope="col">by</th>
              <th scope="col">digest</th>
              <th scope="col">reason</th>
              <th scope="col">compare</th>
              {mayRestore ? <th scope="col">restore</th> : null}
            </tr>
          </thead>
          <tbody>
            {ordered.map((version) => (
              <tr key={version.id}>
                <th scope="row">{version.seq}</th>
                <td>
                  <time dateTime={version.createdAt}>{moment(version.createdAt)}</time>
                </td>
                <td>{version.createdBy.name}</td>
                <td className="figures" title={version.digest}>
                  {version.digest.slice(0, 12)}
                </td>
                <td>{version.reason ?? ''}</td>
                <td className="history-pick">
                  <label>
                    <input
                      type="radio"
                      name="from"
                      checked={from === version.seq}
                      onChange={() => setFrom(version.seq)}
                    />{' '}
                    from
                  </label>
                  <label>
                    <input type="radio" name="to" checked={to === version.seq} onChange={() => setTo(version.seq)} /> to
                  </label>
                </td>
                {mayRestore ? (
                  <td>
                    <button
                      type="button"
                      className="small-press"
                      disabled={restoring !== null}
                      title="The draft takes this version’s text; every version stays"
                      onClick={() => void restore(version)}
                    >
                      {restoring === version.seq ? 'Restoring' : 'Restore'}
                    </button>
                  </td>
                ) : null}
              </tr>
            ))}
          </tbody>
        </table>
      </div>
      <ErrorSentence>{problem}</ErrorSentence>
      {from !== null && to !== null && from !== to ? (
        <DifferenceView entryId={entryId} from={from} to={to} />
      ) : (
        <p className="text-quiet">Choose two versions to see what changed.</p>
      )}
    </div>
  );
}

function useVersion(entryId: string, seq: number) {
  const url = `/api/entries/${encodeURIComponent(entryId)}/versions/${seq}`;
  // A version never changes, so what was fetched stays good.
  return useSWR(url, (key: string) => request<VersionContentDto>('GET', key), {
    revalidateIfStale: false,
    revalidateOnFocus: false,
  });
}

function DifferenceView({ entryId, from, to }: { entryId: string; from: number; to: number }) {
  const before = useVersion(entryId, from);
  const after = useVersion(entryId, to);
  const [whole, setWhole] = useState(false);
  const difference = useMemo(
    () => (before.data && after.data ? documentDifference(before.data.doc, after.data.doc) : null),
    [before.data, after.data],
  );
  const failed = (before.error ?? after.error) as Error | undefined;
  if (failed) return <ErrorSentence>{failed.message}</ErrorSentence>;
  if (!difference || !before.data || !after.data)
    return (
      <p role="status">
        Fetching versions {from} and {to}.
      </p>
    );
  const { counts } = difference;
  const shown = whole ? difference.blocks : difference.blocks.filter((block) => block.change !== 'same' || block.moved);
  return (
    <section aria-label={`From version ${from} to version ${to}`}>
      <h2>
        From version {from} to version {to}
      </h2>
      <p role="status">
        {counts.changed} changed, {counts.added} added, {counts.removed} removed, {counts.moved} moved.{' '}
        <label>
          <input type="checkbox" checked={whole} onChange={(event) => setWhole(event.target.checked)} /> show unchanged
          text
        </label>
      </p>
      {before.data.title !== after.data.title ? (
        <p>
          Title: <del>{before.data.title}</del> <ins>{after.data.title}</ins>
        </p>
      ) : null}
      <ol className="difference">
        {shown.map((block) => (
          <li key={`${block.change}-${block.id}`} className={`difference-${block.change}`}>
            <BlockChange block={block} />
          </li>
        ))}
      </ol>
    </section>
  );
}

function BlockChange({ block }: { block: BlockDifference }) {
  const words = [block.change === 'same' ? null : block.change, block.moved ? 'moved' : null]
    .filter(Boolean)
    .join(', ');
  return (
    <>
      {words ? <p className="difference-word">{words}</p> : null}
      <p>
        <MarkedText parts={block.parts} />
      </p>
      {[...block.values, ...block.facts].map((fact) => (
        <p key={`${fact.about} ${fact.before} ${fact.after}`} className="difference-fact">
          {fact.about}: {fact.before === null ? null : <del>{fact.before}</del>}{' '}
          {fact.after === null ? null : <ins>{fact.after}</ins>}
        </p>
      ))}
    </>
  );
}
