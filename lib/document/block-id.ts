const letters = 'ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz0123456789_-';

/** A new block id: 12 letters of a 64-letter alphabet, 72 random bits. */
export function newBlockId(): string {
  const bytes = globalThis.crypto.getRandomValues(new Uint8Array(12));
  return Array.from(bytes, (byte) => letters[byte & 63]).join('');
}
