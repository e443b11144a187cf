import type { ReactNode } from 'react';

/** Terms with what is known of them; empty ones are left out. */
export function Facts({ facts }: { facts: [string, ReactNode][] }) {
  return (
    <dl className="grid grid-cols-[minmax(7rem,auto)_minmax(0,1fr)] gap-x-4 gap-y-1">
      {facts
        .filter(([, value]) => value !== '' && value !== null && value !== undefined)
        .map(([term, value]) => (
          <div key={term} className="contents">
            <dt className="text-quiet">{term}</dt>
            <dd className="break-words">{value}</dd>
          </div>
        ))}
    </dl>
  );
}
