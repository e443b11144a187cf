import 'server-only';
import { UTApi } from 'uploadthing/server';
import { env, secrets } from '@/server/env/env';

function localService(): { appId: string; apiKey: string; baseUrl: string } {
  const { upload, installation } = secrets();
  return { appId: `local-${installation}`, apiKey: upload, baseUrl: `${env().baseUrl}/api/local-uploads` };
}

/**
 * How the upload library is set up. Without a token of a hosted service everything points at the local stand-in under this
 * origin; with one, nothing but this changes.
 */
export function sdkConfig() {
  const { uploadToken } = env();
  const shared = { isDev: false, logLevel: 'Error' as const };
  if (uploadToken) return { ...shared, token: uploadToken, callbackUrl: `${env().baseUrl}/api/uploadthing` };
  const { appId, apiKey, baseUrl } = localService();
  const token = Buffer.from(JSON.stringify({ apiKey, appId, regions: ['local1'], ingestHost: 'localhost' })).toString(
    'base64',
  );
  return { ...shared, token, ingestUrl: baseUrl, apiUrl: baseUrl, callbackUrl: `${env().baseUrl}/api/uploadthing` };
}

export function uploadApi(): UTApi {
  const { uploadToken } = env();
  if (uploadToken) return new UTApi({ token: uploadToken, logLevel: 'Error' });
  const { baseUrl } = localService();
  const reads = { ufsHost: baseUrl.replace(/^https?:\/\//, ''), ufsAppIdLocation: 'path' as const };
  // The read options are read from the same object at run time; the library's type does not list them yet.
  return new UTApi({ ...sdkConfig(), ...reads } as ConstructorParameters<typeof UTApi>[0]);
}

/** The stand-in's configuration; null where a hosted service is used. */
export function localServiceConfig() {
  if (env().uploadToken) return null;
  const { appId, apiKey, baseUrl } = localService();
  const { dataDir, quotaBytes } = env();
  return { dataDir, baseUrl, appId, apiKey, quotaBytes, idleMs: 30_000, callbackMs: 120_000 };
}
