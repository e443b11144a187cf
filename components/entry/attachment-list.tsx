'use client';

import { RisingLine } from '@/components/ui/stair';
import type { Attachment } from './use-attachments';

type Props = { attachments: Attachment[]; onCancel: (key: string) => void; onRetry: (key: string) => void };

/** Files on their way, how far they are, and what went wrong with those that failed. */
export function AttachmentList({ attachments, onCancel, onRetry }: Props) {
  return (
    <div aria-live="polite">
      {attachments.length > 0 ? (
        <ul className="attachments" aria-label="Files on their way">
          {attachments.map((item) => (
            <li key={item.key}>
              <span>{item.name}</span>
              {item.state === 'sending' ? (
                <RisingLine done={item.done} of={item.of} label={`sending ${item.name}`} />
              ) : null}
              {item.state === 'reading' ? (
                <span className="text-quiet">received; its columns are being read</span>
              ) : null}
              {item.problem ? <span className="text-error">{item.problem}</span> : null}
              {item.state === 'failed' ? (
                <button type="button" className="small-press" onClick={() => onRetry(item.key)}>
                  Send again
                </button>
              ) : null}
              <button type="button" className="small-press" onClick={() => onCancel(item.key)}>
                {item.state === 'failed' ? 'Leave it out' : 'Cancel'}
              </button>
            </li>
          ))}
        </ul>
      ) : null}
    </div>
  );
}
