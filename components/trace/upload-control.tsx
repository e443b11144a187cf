'use client';

import { useId, useState, type DragEvent } from 'react';
import type { Kind } from './send-file';
import { UploadList } from './upload-list';
import { useUploads } from './use-uploads';

type Props = {
  entryId: string;
  kind: Kind;
  onReceived: (id: string, file: File) => void;
};

/** Drop files, or choose them. For a place of its own; the editor takes drops itself and uses `useUploads`. */
export function UploadControl({ entryId, kind, onReceived }: Props) {
  const id = useId();
  const [over, setOver] = useState(false);
  const uploads = useUploads(entryId, (_kind, traceId, file) => onReceived(traceId, file));
  const drop = (event: DragEvent) => {
    event.preventDefault();
    setOver(false);
    const files = Array.from(event.dataTransfer.files);
    if (files.length > 0) uploads.attach(kind, files);
  };
  return (
    <div>
      <div
        className={`flex flex-wrap items-center gap-3 border-2 border-dashed p-4 ${over ? 'border-action bg-tint' : 'border-edge'}`}
        onDragOver={(event) => {
          event.preventDefault();
          setOver(true);
        }}
        onDragLeave={() => setOver(false)}
        onDrop={drop}
      >
        <label htmlFor={id} className="press focus-within:outline-2">
          Choose {kind === 'trace' ? 'trace files' : 'pictures'}
          <input
            id={id}
            type="file"
            multiple
            className="sr-only"
            accept={kind === 'picture' ? 'image/png,image/jpeg,image/gif,image/webp' : undefined}
            onChange={(event) => {
              const files = Array.from(event.target.files ?? []);
              // The same file may be chosen again.
              event.target.value = '';
              if (files.length > 0) uploads.attach(kind, files);
            }}
          />
        </label>
        <span className="text-quiet">
          {kind === 'trace'
            ? 'or drop them here: tables of numbers in text, up to 200 MB each'
            : 'or drop them here: PNG, JPEG, GIF, WebP'}
        </span>
      </div>
      <UploadList {...uploads} />
    </div>
  );
}
