import { sha256 } from '@noble/hashes/sha2.js';
import { bytesToHex } from '@noble/hashes/utils.js';

const slice = 1 << 20;

/**
 * SHA-256 of a file, hex, read in slices of 1 MiB so that neither memory nor the page's answers suffer.
 * @throws Error with a sentence where the file can no longer be read; DOMException AbortError when `signal` says so.
 */
export async function fileDigest(
  file: Blob,
  onProgress: (bytes: number) => void,
  signal: AbortSignal,
): Promise<string> {
  const hash = sha256.create();
  for (let at = 0; at < file.size; at += slice) {
    signal.throwIfAborted();
    let bytes: ArrayBuffer;
    try {
      bytes = await file.slice(at, at + slice).arrayBuffer();
    } catch (cause) {
      throw new Error('The file can no longer be read: it was changed or moved. Nothing was sent; choose it again.', {
        cause,
      });
    }
    hash.update(new Uint8Array(bytes));
    onProgress(Math.min(file.size, at + slice));
    // Reading a slice is quick; without a pause typing would stutter.
    await new Promise((resolve) => setTimeout(resolve));
  }
  return bytesToHex(hash.digest());
}
