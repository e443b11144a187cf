import type { BindingDto } from '@/lib/schemas/signing';
import { Facts } from '@/components/ui/facts';
import { AttentionSentence } from '@/components/ui/sentence';

/** Everything that a signature binds, and what is unfinished. */
export function Binding({ binding }: { binding: BindingDto }) {
  return (
    <div className="space-y-6">
      <Facts
        facts={[
          ['Entry', <strong key="t">{binding.title}</strong>],
          ['Leaf', <span key="l" className="figures">{`${binding.notebook} leaf ${binding.leaf}`}</span>],
          [
            'Work of',
            <span key="w" className="figures">
              {binding.workDate}
            </span>,
          ],
          [
            'Version',
            <span key="v" className="figures">
              {binding.seq}
            </span>,
          ],
          [
            'Digest',
            <code key="d" className="break-all">
              {binding.digest}
            </code>,
          ],
        ]}
      />
      {binding.warnings.length > 0 ? (
        <AttentionSentence>
          <p className="font-semibold">Unfinished, as far as the server can tell:</p>
          <ul className="list-disc pl-5">
            {binding.warnings.map((warning) => (
              <li key={warning}>{warning}</li>
            ))}
          </ul>
        </AttentionSentence>
      ) : null}
      <section>
        <h2>Values bound</h2>
        {binding.values.length === 0 ? (
          <p className="text-quiet">None.</p>
        ) : (
          <div className="relative overflow-x-auto" tabIndex={0} role="region" aria-label="Values bound">
            <table className="table-plain">
              <thead>
                <tr>
                  <th scope="col">Symbol</th>
                  <th scope="col">Result</th>
                  <th scope="col">Line as written</th>
                </tr>
              </thead>
              <tbody>
                {binding.values.map((value, index) => (
                  <tr key={index}>
                    <td className="figures">{value.symbol}</td>
                    <td className={value.text ? 'figures whitespace-nowrap' : 'text-error'}>
                      {value.text ?? value.error ?? 'no result'}
                    </td>
                    <td className="figures">{value.source}</td>
                  </tr>
                ))}
              </tbody>
            </table>
          </div>
        )}
      </section>
      <section>
        <h2>Files bound</h2>
        {binding.traces.length + binding.pictures.length === 0 ? (
          <p className="text-quiet">None.</p>
        ) : (
          <ul>
            {binding.traces.map((trace) => (
              <li key={trace.handle} className="border-t border-rule py-1.5">
                <span className="figures font-semibold">{trace.handle}</span> {trace.fileName},{' '}
                {trace.bytes.toLocaleString('en').replace(/,/g, '\u2009')} bytes
                <code className="block break-all text-sm text-quiet">SHA-256 {trace.sha256}</code>
              </li>
            ))}
            {binding.pictures.map((picture) => (
              <li key={picture.sha256} className="border-t border-rule py-1.5">
                {picture.fileName}
                <code className="block break-all text-sm text-quiet">SHA-256 {picture.sha256}</code>
              </li>
            ))}
          </ul>
        )}
      </section>
    </div>
  );
}
