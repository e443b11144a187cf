import Link from 'next/link';
import type { TraceDto } from '@/lib/schemas/entry';

/** Handle, file, size and digest, below a trace. */
export function TraceFoot({ handle, file }: { handle: string; file: TraceDto | undefined }) {
  return (
    <p className="trace-foot">
      <strong className="figures">{handle}</strong>
      {file ? (
        <>
          <Link href={`/traces/${encodeURIComponent(file.id)}`} title="The trace on a page of its own">
            {file.fileName}
          </Link>
          {file.state === 'parsed' ? (
            <span>
              {file.columns.length} columns, {file.rows.toLocaleString('en').replaceAll(',', '\u2009')} rows
            </span>
          ) : null}
          <span className="trace-digest figures">digest {file.sha256.slice(0, 8)}</span>
        </>
      ) : (
        <span>The file is being fetched.</span>
      )}
    </p>
  );
}
