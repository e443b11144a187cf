import type { BlockStamp } from '@/lib/schemas/entry';

type Props = { stamp: BlockStamp | undefined; written: string | undefined; names: Record<string, string> };

const moment = (iso: string) =>
  `${iso.slice(0, 10)} ${iso.slice(11, 19)}${iso
    .slice(19)
    .replace(/^\.\d+/, '')
    .replace('Z', ' UTC')}`;

/** Who wrote this block and when: by the writer's clock, and as the server received it. */
export function BlockProvenance({ stamp, written, names }: Props) {
  if (!stamp) {
    return (
      <section>
        <h2>When this was written</h2>
        <p>
          {written
            ? `Written ${moment(written)} in this browser; the server has not received it yet.`
            : 'Not written yet.'}
        </p>
      </section>
    );
  }
  const line = (what: string, s: BlockStamp['first']) => (
    <>
      <dt>{what}</dt>
      <dd>
        <time dateTime={s.at}>{moment(s.at)}</time>, {names[s.by] ?? 'a former member'}
      </dd>
      <dt>received</dt>
      <dd>
        <time dateTime={s.received}>{moment(s.received)}</time>
        {Math.abs(s.offsetMs) >= 1000
          ? `; the writer’s clock was ${Math.abs(s.offsetMs / 1000).toFixed(0)} s ${s.offsetMs > 0 ? 'fast' : 'slow'}`
          : ''}
      </dd>
    </>
  );
  const changed = stamp.last.at !== stamp.first.at || stamp.last.by !== stamp.first.by;
  return (
    <section>
      <h2>When this was written</h2>
      <dl className="pairs">
        {line('first written', stamp.first)}
        {changed ? line('last changed', stamp.last) : null}
      </dl>
      {written ? <p className="text-quiet">Changed {moment(written)} in this browser; not yet received.</p> : null}
    </section>
  );
}
