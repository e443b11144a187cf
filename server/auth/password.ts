import 'server-only';
import { randomBytes, scrypt as scryptCallback, timingSafeEqual, type ScryptOptions } from 'node:crypto';

/** OWASP Password Storage Cheat Sheet: scrypt N = 2^15, r = 8, p = 3 (32 MiB). */
const cost = { N: 2 ** 15, r: 8, p: 3, maxmem: 64 * 1024 * 1024 };

function scrypt(password: string, salt: Buffer, options: ScryptOptions): Promise<Buffer> {
  // NFC, so that one password typed on two keyboards is one password; never truncated.
  const bytes = Buffer.from(password.normalize('NFC'), 'utf8');
  return new Promise((resolve, reject) =>
    scryptCallback(bytes, salt, 32, options, (error, key) => (error ? reject(error) : resolve(key))),
  );
}

/** `scrypt$N$r$p$salt$key`, salt and key base64url. */
export async function hashPassword(password: string): Promise<string> {
  const salt = randomBytes(16);
  const key = await scrypt(password, salt, cost);
  return ['scrypt', cost.N, cost.r, cost.p, salt.toString('base64url'), key.toString('base64url')].join('$');
}

export async function checkPassword({ hash, password }: { hash: string; password: string }): Promise<boolean> {
  const [scheme, n, r, p, salt, key] = hash.split('$');
  if (scheme !== 'scrypt') return false;
  const wanted = Buffer.from(key, 'base64url');
  const made = await scrypt(password, Buffer.from(salt, 'base64url'), {
    ...cost,
    N: Number(n),
    r: Number(r),
    p: Number(p),
  });
  return timingSafeEqual(wanted, made);
}
