'use client';

import { RisingLine } from '@/components/ui/stair';
import type { Attachment } from './use-attachments';

type Act = (key: string) => void;
type Props = { attachments: Attachment[]; onCancel: Act; onRetry: Act; onPause: Act; onResume: Act };

const stages = {
  reading: 'reading it for its digest',
  sending: 'sending',
  recording: 'sent; the server is checking it',
};

/** Files on their way, how far they are, and what went wrong with those that failed. */
export function AttachmentList({ attachments, onCancel, onRetry, onPause, onResume }: Props) {
  return (
    <div aria-live="polite">
      {attachments.length > 0 ? (
        <ul className="attachments" aria-label="Files on their way">
          {attachments.map((item) => (
            <li key={item.key}>
              <span>{item.name}</span>
              {item.state === 'sending' || item.state === 'paused' ? (
                <>
                  <RisingLine done={item.done} of={item.of} label={`${stages[item.stage]} ${item.name}`} />
                  <span className="text-quiet">{item.state === 'paused' ? 'paused' : stages[item.stage]}</span>
                </>
              ) : null}
              {item.state === 'sending' && item.stage === 'sending' ? (
                <button type="button" className="small-press" onClick={() => onPause(item.key)}>
                  Pause
                </button>
              ) : null}
              {item.state === 'paused' ? (
                <button type="button" className="small-press" onClick={() => onResume(item.key)}>
                  Go on
                </button>
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
