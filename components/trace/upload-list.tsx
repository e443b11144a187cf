'use client';

import { RisingLine } from '@/components/ui/stair';
import type { Upload, Uploads } from './use-uploads';

const words: Record<Upload['state'], string> = {
  waiting: 'waits its turn',
  reading: 'reading the file for its digest',
  sending: 'sending',
  recording: 'sent; the server is checking and recording it',
  paused: 'paused',
  'broken off': 'broken off',
  received: 'received',
  refused: 'not received',
};

const megabytes = (bytes: number) => `${(bytes / 1e6).toFixed(bytes < 1e7 ? 1 : 0)}\u2009MB`;

/** What is being sent, how far it is, and what can be done with it. */
export function UploadList({ uploads, pause, resume, again, dismiss }: Uploads) {
  const said = uploads
    .filter(({ state }) => state === 'received' || state === 'refused' || state === 'broken off')
    .map(({ name, state }) => `${name}: ${words[state]}`)
    .join('. ');
  return (
    <>
      <p role="status" className="sr-only">
        {said}
      </p>
      {uploads.length > 0 ? (
        <ul aria-label="files being attached" className="my-2 space-y-2">
          {uploads.map((upload) => (
            <Item key={upload.id} upload={upload} pause={pause} resume={resume} again={again} dismiss={dismiss} />
          ))}
        </ul>
      ) : null}
    </>
  );
}

function Item({ upload, pause, resume, again, dismiss }: { upload: Upload } & Omit<Uploads, 'uploads' | 'attach'>) {
  const { id, name, bytes, done, state, problem } = upload;
  const settled = state === 'received' || state === 'refused';
  const button = (text: string, action: (id: string) => void) => (
    <button type="button" className="min-h-6 cursor-pointer px-1 text-action underline" onClick={() => action(id)}>
      {text}
      <span className="sr-only"> {name}</span>
    </button>
  );
  return (
    <li className="border-l-4 border-rule pl-3 text-sm">
      <span className="flex flex-wrap items-center gap-x-3">
        <strong className="break-all">{name}</strong>
        {settled ? null : <RisingLine done={done} of={bytes} label={`${name}: ${words[state]}`} />}
        <span className={state === 'refused' || state === 'broken off' ? 'text-error' : 'text-quiet'}>
          {words[state]}
          {settled || state === 'waiting' ? '' : `, ${megabytes(done)} of ${megabytes(bytes)}`}
        </span>
        {state === 'sending' ? button('pause', pause) : null}
        {state === 'paused' ? button('go on', resume) : null}
        {state === 'broken off' ? button('go on', again) : null}
        {button(settled ? 'take off the list' : 'cancel', dismiss)}
      </span>
      {problem ? (
        <p role="alert" className="text-error">
          {problem}
        </p>
      ) : null}
    </li>
  );
}
