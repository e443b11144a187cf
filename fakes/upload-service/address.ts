import { createHmac, timingSafeEqual } from 'node:crypto';
import type { UploadServiceConfig } from './config';
import { ServiceRefusal } from './config';

/** Signed addresses: HMAC-SHA256 of the whole address before `&signature=`. */

export function sign(apiKey: string, text: string): string {
  return `hmac-sha256=${createHmac('sha256', apiKey).update(text).digest('hex')}`;
}

export function sameText(a: string, b: string): boolean {
  const left = Buffer.from(a);
  const right = Buffer.from(b);
  return left.length === right.length && timingSafeEqual(left, right);
}

/** The address without its signature, rebuilt on the configured base. */
function checkSignature(config: UploadServiceConfig, base: string, path: string, search: string): URLSearchParams {
  const at = search.lastIndexOf('&signature=');
  const params = new URLSearchParams(search);
  const given = params.get('signature');
  if (at < 0 || given === null) throw new ServiceRefusal(403, 'The address carries no signature.');
  if (!sameText(given, sign(config.apiKey, base + path + search.slice(0, at)))) {
    throw new ServiceRefusal(403, 'The address was changed: its signature does not match. Start the upload again.');
  }
  const expires = Number(params.get('expires'));
  if (!(expires > Date.now()))
    throw new ServiceRefusal(403, 'The address has expired. Start the upload again; what arrived is kept.');
  return params;
}

export type UploadAddress = {
  key: string;
  name: string;
  size: number;
  type: string;
  slug: string;
  customId: string | null;
};

/** Reads and checks the address of an upload. Values are encoded twice on the way here. */
export function readUploadAddress(config: UploadServiceConfig, key: string, search: string): UploadAddress {
  const params = checkSignature(config, config.baseUrl, `/${key}`, search);
  const value = (name: string) => {
    const once = params.get(`x-ut-${name}`);
    return once === null ? null : decodeURIComponent(once);
  };
  if (value('identifier') !== config.appId)
    throw new ServiceRefusal(403, 'The address belongs to another application.');
  const size = Number(value('file-size'));
  if (!Number.isSafeInteger(size) || size < 0) throw new ServiceRefusal(400, 'The address states no size.');
  return {
    key,
    name: value('file-name') ?? '',
    size,
    type: value('file-type') ?? 'application/octet-stream',
    slug: value('slug') ?? '',
    customId: value('custom-id'),
  };
}

/** Checks the address of a signed read. The library writes it with plain http for a local host. */
export function checkReadAddress(config: UploadServiceConfig, key: string, search: string): void {
  checkSignature(config, config.baseUrl.replace(/^https:/, 'http:'), `/a/${config.appId}/${key}`, search);
}
