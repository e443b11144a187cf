'use client';

import { useState } from 'react';

type Props = { id: string; pictureId: string; alt: string; caption: string };

/** A picture of a version with its caption. */
export function ReadingPicture({ id, pictureId, alt, caption }: Props) {
  const [failed, setFailed] = useState(false);
  return (
    <figure className="picture" data-id={id}>
      {failed ? (
        <p className="text-error">The picture could not be loaded. It stays in the entry; reload to try again.</p>
      ) : (
        // The image comes from this server's own route; the optimiser would make a second copy of a record.
        // eslint-disable-next-line @next/next/no-img-element -- see above
        <img src={`/api/pictures/${encodeURIComponent(pictureId)}`} alt={alt} onError={() => setFailed(true)} />
      )}
      {caption ? <figcaption>{caption}</figcaption> : null}
    </figure>
  );
}
