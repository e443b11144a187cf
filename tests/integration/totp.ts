import { createHmac } from 'node:crypto';

/** Time-based one-time password after RFC 6238 (HMAC-SHA-1, steps of 30 s from 1970). */
export function totp(key: Buffer, unixSeconds: number, digits = 6): string {
  const counter = Buffer.alloc(8);
  counter.writeBigUInt64BE(BigInt(Math.floor(unixSeconds / 30)));
  const mac = createHmac('sha1', key).update(counter).digest();
  const offset = mac[19] & 15;
  const number = mac.readUInt32BE(offset) & 0x7fffffff;
  return String(number % 10 ** digits).padStart(digits, '0');
}

/** Base32 of RFC 4648, section 6. */
export function fromBase32(text: string): Buffer {
  const bits = [...text.replace(/=+$/, '')]
    .map((letter) => 'ABCDEFGHIJKLMNOPQRSTUVWXYZ234567'.indexOf(letter).toString(2).padStart(5, '0'))
    .join('');
  return Buffer.from((bits.match(/.{8}/g) ?? []).map((byte) => Number.parseInt(byte, 2)));
}

/** Key of an `otpauth:` address, as an authenticator reads it. */
export const keyOf = (uri: string): Buffer => fromBase32(new URL(uri).searchParams.get('secret') ?? '');
