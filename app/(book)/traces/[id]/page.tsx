import type { Metadata } from 'next';
import Link from 'next/link';
import { TracePage } from '@/components/trace/trace-page';
import { Facts } from '@/components/ui/facts';
import { ErrorSentence } from '@/components/ui/sentence';
import { pageAccess } from '@/server/access/page';
import { traceWords } from '@/server/entries/trace-page-service';
import { traceDetail } from '@/server/traces/service';

export const metadata: Metadata = { title: 'Trace' };

export default async function TraceRoute({ params }: { params: Promise<{ id: string }> }) {
  const { id } = await params;
  const scope = await pageAccess('trace.read', id, `/traces/${id}`);
  const trace = await traceDetail(id);
  const words = await traceWords(scope);
  const settings = words?.settings ?? null;
  const stated = (value: string | null | undefined) => value ?? '';
  return (
    <>
      {scope.entry ? (
        <p>
          <Link href={`/entries/${scope.entry.id}`}>
            {scope.notebook.code} leaf {scope.entry.leaf}: {scope.entry.title}
          </Link>
        </p>
      ) : null}
      <h1 className="break-words">
        {words ? <span className="figures">{words.handle} </span> : null}
        {trace.fileName}
      </h1>
      {trace.problem ? <ErrorSentence>{trace.problem}</ErrorSentence> : null}
      {trace.state === 'received' ? (
        <p className="text-quiet">The file is still being read. Reload the page in a moment.</p>
      ) : null}
      {trace.state === 'parsed' ? <TracePage trace={trace} words={words} /> : null}
      <div className="mt-8 grid grid-cols-1 gap-10 lg:grid-cols-2">
        <section>
          <h2 className="mb-2">Where it comes from</h2>
          <Facts
            facts={[
              ['File', trace.fileName],
              [
                'Received',
                <span key="r" className="figures">
                  {trace.receivedAt.slice(0, 19).replace('T', ' ')} UTC
                </span>,
              ],
              ['By', trace.uploadedBy.name],
              [
                'Bytes',
                <span key="b" className="figures">
                  {trace.bytes}
                </span>,
              ],
              [
                'SHA-256',
                <code key="d" className="break-all">
                  {trace.sha256}
                </code>,
              ],
              [
                'Rows',
                <span key="n" className="figures">
                  {trace.rows}
                </span>,
              ],
              [
                'Comment lines',
                trace.comments.length === 0 ? (
                  ''
                ) : (
                  <pre key="c" className="relative overflow-x-auto text-sm" tabIndex={0}>
                    {trace.comments.slice(0, 40).join('\n')}
                  </pre>
                ),
              ],
            ]}
          />
          <p className="mt-3">
            <a className="press" href={`/api/traces/${id}/file`}>
              The file as received
            </a>
          </p>
        </section>
        <section>
          <h2 className="mb-2">What its author states</h2>
          {settings ? (
            <Facts
              facts={[
                ['Scan', stated(settings.scanKind)],
                ['Sign', stated(settings.sign)],
                ['Convention', stated(settings.signConvention)],
                ['Drive frequency', stated(settings.drive.frequency)],
                ['Waveform', stated(settings.drive.waveform)],
                ['Amplitude', stated(settings.drive.amplitude)],
                [
                  'Load, wait, eject',
                  [settings.drive.load, settings.drive.wait, settings.drive.eject].filter(Boolean).join(', '),
                ],
                ['Instrument', stated(settings.instrument.name)],
                ['Range', stated(settings.instrument.range)],
                ['Bandwidth', stated(settings.instrument.bandwidth)],
                ['Integration time', stated(settings.instrument.integrationTime)],
                ['Overload', stated(settings.instrument.overload)],
                ['Sweep', stated(settings.sweepDirection)],
              ]}
            />
          ) : (
            <p className="text-quiet">The trace is not placed in the text of its entry.</p>
          )}
          <h2 className="mb-2 mt-6">Columns</h2>
          <div className="relative overflow-x-auto" tabIndex={0} role="region" aria-label="Columns">
            <table className="table-plain">
              <thead>
                <tr>
                  {['Symbol', 'In the file', 'Unit', 'Missing', 'Gain', 'Offset'].map((title) => (
                    <th key={title} scope="col">
                      {title}
                    </th>
                  ))}
                </tr>
              </thead>
              <tbody>
                {trace.columns.map((column, index) => {
                  const said = settings?.columns[index];
                  return (
                    <tr key={index}>
                      <td className="figures">{said?.symbol ?? column.symbol}</td>
                      <td className="break-words">{column.name}</td>
                      <td>{said?.unit ?? column.unit ?? <span className="text-error">not stated</span>}</td>
                      <td className="figures">{column.missing}</td>
                      <td>{said?.gain ? `${said.gain.text} (${said.gain.source})` : ''}</td>
                      <td>{said?.offset ? `${said.offset.text} (${said.offset.source})` : ''}</td>
                    </tr>
                  );
                })}
              </tbody>
            </table>
          </div>
        </section>
      </div>
    </>
  );
}
