import 'server-only';
import { createHash } from 'node:crypto';
import { canonicalBytes } from '@/lib/integrity/canonical';

export const sha256 = (bytes: Uint8Array): Uint8Array => new Uint8Array(createHash('sha256').update(bytes).digest());

export const sha256Hex = (bytes: Uint8Array): string => createHash('sha256').update(bytes).digest('hex');

/** Canonical bytes of a record with their SHA-256. */
export function sealRecord(value: unknown): { canonical: Uint8Array; digest: string } {
  const canonical = canonicalBytes(value);
  return { canonical, digest: sha256Hex(canonical) };
}
