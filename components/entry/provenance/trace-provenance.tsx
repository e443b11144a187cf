import Link from 'next/link';
import type { TraceNodeAttributes } from '@/lib/document/attributes';
import type { TraceDto } from '@/lib/schemas/entry';

const grouped = (n: number) => n.toLocaleString('en').replaceAll(',', '\u2009');

/** What a trace is: file, who, when, bytes, digest, columns with units, sign, gain and offset with their sources. */
export function TraceProvenance({ node, file }: { node: TraceNodeAttributes; file: TraceDto | undefined }) {
  const { settings } = node;
  return (
    <section>
      <h2>
        Trace <span className="figures">{node.handle}</span>
      </h2>
      {file ? (
        <dl className="pairs">
          <dt>file</dt>
          <dd>
            <Link href={`/traces/${encodeURIComponent(file.id)}`}>{file.fileName}</Link>
          </dd>
          <dt>received</dt>
          <dd>
            <time dateTime={file.receivedAt}>{file.receivedAt.slice(0, 19).replace('T', ' ')} UTC</time>,{' '}
            {file.uploadedBy.name}
          </dd>
          <dt>size</dt>
          <dd>
            {grouped(file.bytes)} bytes, {grouped(file.rows)} rows
          </dd>
          <dt>SHA-256</dt>
          <dd className="figures digest">{file.sha256}</dd>
          {file.problem ? (
            <>
              <dt>problem</dt>
              <dd className="text-error">{file.problem}</dd>
            </>
          ) : null}
        </dl>
      ) : (
        <p className="text-quiet">The file’s facts are being fetched.</p>
      )}
      <table className="table-plain">
        <caption className="sr-only">Columns</caption>
        <thead>
          <tr>
            <th scope="col">column</th>
            <th scope="col">unit</th>
            <th scope="col">gain, offset</th>
          </tr>
        </thead>
        <tbody>
          {settings.columns.map((column) => (
            <tr key={column.symbol}>
              <th scope="row">
                <span className="figures">{column.symbol}</span> {column.name === column.symbol ? '' : column.name}
              </th>
              <td>{column.unit ?? <span className="text-attention">not stated</span>}</td>
              <td>
                {column.gain ? `${column.gain.text}${column.gain.source ? `, ${column.gain.source}` : ''}` : 'no gain'}
                {'; '}
                {column.offset
                  ? `${column.offset.text}${column.offset.source ? `, ${column.offset.source}` : ''}`
                  : 'no offset'}
              </td>
            </tr>
          ))}
        </tbody>
      </table>
      <p>
        Sign: {settings.sign ?? 'not stated'}
        {settings.signConvention ? `, ${settings.signConvention}` : ''}.
      </p>
      {node.spans.length > 0 ? (
        <p>
          Spans:{' '}
          {node.spans
            .map(
              (span) => `${span.name} (${span.intervals.map(([a, b]) => `${a} to ${b}`).join('; ')} in ${span.axis})`,
            )
            .join(', ')}
          .
        </p>
      ) : null}
    </section>
  );
}
