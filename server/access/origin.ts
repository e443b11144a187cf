import 'server-only';
import { AppError } from '@/lib/errors/app-error';
import { env } from '@/server/env/env';

const reading = new Set(['GET', 'HEAD', 'OPTIONS']);

/**
 * Refuses a change that another site could have caused: the Origin must be ours, letter for letter, and the browser's own
 * Sec-Fetch-Site must say so. Calls by bearer token carry no cookie and need no Origin.
 */
export function refuseCrossSite(request: Request): void {
  if (reading.has(request.method)) return;
  if (request.headers.get('authorization')?.startsWith('Bearer ')) return;
  const site = request.headers.get('sec-fetch-site');
  const origin = request.headers.get('origin');
  if ((site !== null && site !== 'same-origin') || !origin || !ownOrigins().has(origin)) {
    throw new AppError('cross_site', 'This request did not come from a page of this notebook, so nothing was done.');
  }
}

/** BASE_URL, and on loopback its other names. */
function ownOrigins(): Set<string> {
  const base = new URL(env().baseUrl);
  const origins = new Set([base.origin]);
  if (base.hostname === 'localhost' || base.hostname === '127.0.0.1') {
    for (const host of ['localhost', '127.0.0.1'])
      origins.add(`${base.protocol}//${host}${base.port ? `:${base.port}` : ''}`);
  }
  return origins;
}
