import Link from 'next/link';
import type { EntryDto, VersionDto } from '@/lib/schemas/entry';
import { Stair } from '@/components/ui/stair';

type Props = {
  entry: EntryDto;
  title: string;
  version: Pick<VersionDto, 'seq' | 'digest'> | null;
  /** null while reading. */
  onTitle: ((title: string) => void) | null;
};

/** Head of the sheet: notebook and leaf number, title, facts, state. */
export function SheetHead({ entry, title, version, onTitle }: Props) {
  return (
    <header className="sheet-head">
      <p className="leaf">
        <Link href={`/notebooks/${encodeURIComponent(entry.notebook.code)}`}>{entry.notebook.code}</Link>
        <span className="leaf-word">leaf</span>
        <strong>{entry.leaf}</strong>
      </p>
      <div className="sheet-title">
        {onTitle ? (
          <>
            <h1 className="sr-only">{title || 'Entry without a title'}</h1>
            <textarea
              aria-label="Title"
              className="title-field"
              rows={1}
              maxLength={300}
              placeholder="Title"
              value={title}
              onChange={(event) => onTitle(event.target.value.replaceAll('\n', ' '))}
            />
          </>
        ) : (
          <h1>{title}</h1>
        )}
        <Stair state={entry.state} />
      </div>
      <dl className="facts">
        <Fact name="work of">
          <time dateTime={entry.workDate}>{entry.workDate}</time>
        </Fact>
        {entry.cooldown ? (
          <Fact name="cooldown">
            <Link href={`/cooldowns/${entry.cooldown.id}`}>{entry.cooldown.name}</Link>
          </Fact>
        ) : null}
        {entry.devices.length > 0 ? (
          <Fact name={entry.devices.length > 1 ? 'devices' : 'device'}>
            {entry.devices.map((device, index) => (
              <span key={device.id}>
                {index > 0 ? ', ' : ''}
                <Link href={`/devices/${device.id}`}>{device.name}</Link>
              </span>
            ))}
          </Fact>
        ) : null}
        <Fact name="by">{entry.author.name}</Fact>
        {entry.contributors.length > 0 ? (
          <Fact name="with">{entry.contributors.map((person) => person.name).join(', ')}</Fact>
        ) : null}
        {version ? (
          <Fact name="version">
            {version.seq}{' '}
            <Link href={`/entries/${entry.id}/versions`} className="figures" title={`digest ${version.digest}`}>
              {version.digest.slice(0, 4)} {version.digest.slice(4, 8)}
            </Link>
          </Fact>
        ) : null}
      </dl>
      {entry.struckReason ? <p className="struck-reason">Struck out: {entry.struckReason}</p> : null}
    </header>
  );
}

function Fact({ name, children }: { name: string; children: React.ReactNode }) {
  return (
    <div>
      <dt>{name}</dt> <dd>{children}</dd>
    </div>
  );
}
