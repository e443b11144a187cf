'use client';

import { useState } from 'react';
import { cautionText } from '@/lib/document/caution-text';

type Props = {
  at: string | null;
  by: string | null;
  /** Given to who may still acknowledge it. */
  onAcknowledge?: (() => void) | undefined;
};

/** The words of the caution, in short once acknowledged, and who acknowledged them. */
export function CautionText({ at, by, onAcknowledge }: Props) {
  const [whole, setWhole] = useState(at === null);
  return (
    <>
      <p>
        <strong>{cautionText.title}</strong>{' '}
        {whole ? null : `${cautionText.points.map((point) => point.about.toLowerCase()).join(', ')}. `}
        {cautionText.ending}
      </p>
      {whole ? (
        <ul>
          {cautionText.points.map((point) => (
            <li key={point.about}>
              <strong>{point.about}.</strong> {point.text}
            </li>
          ))}
        </ul>
      ) : null}
      <p className="caution-foot">
        {at
          ? `Read and acknowledged ${at.slice(0, 10)} ${at.slice(11, 16)}${by ? `, ${by}` : ''}.`
          : 'Not acknowledged yet.'}{' '}
        {onAcknowledge ? (
          <button
            type="button"
            className="small-press"
            onClick={() => {
              onAcknowledge();
              setWhole(false);
            }}
          >
            I have read this
          </button>
        ) : null}
        <button type="button" className="small-press" aria-expanded={whole} onClick={() => setWhole(!whole)}>
          {whole ? 'Shorter' : 'Read it all'}
        </button>
      </p>
    </>
  );
}
