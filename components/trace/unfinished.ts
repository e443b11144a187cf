/**
 * Uploads that have begun and not ended, kept by this browser: the same file chosen again after a break, a reload or a closed
 * tab goes on under the same id. A finished upload is forgotten, so that attaching a file twice makes two references.
 */

const prefix = 'kelvinleaf-upload ';
const keptForMs = 7 * 86_400_000;

export type FileMark = {
  entryId: string;
  kind: string;
  name: string;
  size: number;
  lastModified: number;
  digest: string;
};

const key = (mark: FileMark) =>
  prefix + [mark.entryId, mark.kind, mark.digest, mark.size, mark.lastModified, mark.name].join(' ');

/** The id of this file's upload: an earlier one that broke off, or a new one. */
export function uploadIdFor(mark: FileMark): { uploadId: string; resumed: boolean } {
  const fresh = () => crypto.randomUUID();
  try {
    const known = localStorage.getItem(key(mark));
    if (known) {
      const { uploadId, at } = JSON.parse(known) as { uploadId: string; at: number };
      if (Date.now() - at < keptForMs) return { uploadId, resumed: true };
    }
    const uploadId = fresh();
    localStorage.setItem(key(mark), JSON.stringify({ uploadId, at: Date.now() }));
    return { uploadId, resumed: false };
  } catch {
    // Without local storage an upload that breaks off starts again; nothing else is lost.
    return { uploadId: fresh(), resumed: false };
  }
}

export function forgetUpload(mark: FileMark): void {
  try {
    localStorage.removeItem(key(mark));
  } catch {
    // Nothing was kept there then.
  }
}
