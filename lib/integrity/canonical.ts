import canonicalize from 'canonicalize';

/** Gives the SHA-256 of the bytes; passed in, so that browser, server and worker each use what they have. */
export type Sha256 = (bytes: Uint8Array) => Uint8Array;

/**
 * Canonical UTF-8 bytes of a JSON value (RFC 8785, JSON Canonicalization Scheme).
 * @throws Error on what JSON cannot carry exactly: undefined members, NaN, infinities, lone surrogates.
 */
export function canonicalBytes(value: unknown): Uint8Array {
  refuseInexact(value);
  const text = canonicalize(value);
  if (text === undefined) throw new Error('Nothing to canonicalise.');
  return new TextEncoder().encode(text);
}

function refuseInexact(root: unknown): void {
  const open: unknown[] = [root];
  while (open.length > 0) {
    const value = open.pop();
    if (typeof value === 'string') {
      if (!value.isWellFormed()) throw new Error('The text holds half of a surrogate pair, which has no UTF-8 form.');
    } else if (typeof value === 'number') {
      if (!Number.isFinite(value)) throw new Error('NaN and infinities have no JSON form.');
    } else if (typeof value === 'object' && value !== null) {
      for (const [key, item] of Object.entries(value)) {
        if (item === undefined) throw new Error(`The member ${key} has no value.`);
        open.push(key, item);
      }
    } else if (typeof value !== 'boolean' && value !== null) {
      throw new Error(`A ${typeof value} has no JSON form.`);
    }
  }
}

export function toHex(bytes: Uint8Array): string {
  return Array.from(bytes, (byte) => byte.toString(16).padStart(2, '0')).join('');
}

/** SHA-256 of the canonical bytes, lower-case hex. */
export function digestOf(value: unknown, sha256: Sha256): string {
  return toHex(sha256(canonicalBytes(value)));
}
