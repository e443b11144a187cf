import type { EntryState } from '@/lib/schemas/entry';

/** The words beside the stair; the number of filled treads says the same without colour. */
const shown: Record<EntryState, { treads: 0 | 1 | 2 | 3; words: string }> = {
  draft: { treads: 1, words: 'being written' },
  signed: { treads: 2, words: 'signed, waits for countersignature' },
  witnessed: { treads: 3, words: 'signed and countersigned' },
  'struck out': { treads: 0, words: 'struck out' },
};

/** State of an entry as three treads: written, signed, countersigned. `short` leaves out the words for sighted readers. */
export function Stair({ state, short = false }: { state: EntryState; short?: boolean }) {
  const { treads, words } = shown[state];
  const struck = state === 'struck out';
  return (
    <span className={`inline-flex items-center gap-2 ${struck ? 'text-quiet' : 'text-signed'}`}>
      <Treads filled={treads} struck={struck} />
      <span className={short ? 'sr-only' : ''}>{words}</span>
    </span>
  );
}

function Treads({ filled, struck }: { filled: number; struck: boolean }) {
  return (
    <svg width="38" height="14" viewBox="0 0 38 14" aria-hidden="true" className="shrink-0">
      {[0, 1, 2].map((tread) => {
        const height = 4 + tread * 4;
        return (
          <rect
            key={tread}
            x={tread * 12.5 + 0.75}
            y={13.25 - height}
            width="11"
            height={height}
            fill={tread < filled ? 'currentColor' : 'none'}
            stroke="currentColor"
            strokeWidth="1.25"
          />
        );
      })}
      {struck ? <path d="M0 13 L38 1" stroke="currentColor" strokeWidth="1.5" /> : null}
    </svg>
  );
}

/** The mark of the product: a rising current staircase. */
export function Mark() {
  return (
    <svg width="24" height="16" viewBox="0 0 24 16" aria-hidden="true" className="shrink-0">
      <path d="M1 14 H7 V9 H14 V4 H23" fill="none" stroke="var(--action)" strokeWidth="2.2" />
    </svg>
  );
}

/** Progress of long work as the rising line; `of` 0 while the extent is unknown. */
export function RisingLine({ done, of, label }: { done: number; of: number; label: string }) {
  const share = of > 0 ? Math.min(1, done / of) : 0;
  const percent = Math.round(share * 100);
  return (
    <span
      role="progressbar"
      aria-label={label}
      aria-valuemin={0}
      aria-valuemax={100}
      aria-valuenow={percent}
      className="block"
    >
      <svg viewBox="0 0 120 18" width="120" height="18" aria-hidden="true">
        <path d="M1 16 H40 V10 H80 V4 H119" fill="none" stroke="var(--rule)" strokeWidth="2.5" />
        <path
          d="M1 16 H40 V10 H80 V4 H119"
          fill="none"
          stroke="var(--action)"
          strokeWidth="2.5"
          pathLength={100}
          strokeDasharray={`${percent} 100`}
        />
      </svg>
    </span>
  );
}
