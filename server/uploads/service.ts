import 'server-only';
import { createRouteHandler } from 'uploadthing/server';
import { errorBody } from '@/lib/errors/app-error';
import { refuseCrossSite } from '@/server/access/origin';
import { toAppError } from '@/server/access/to-app-error';
import { uploadRouter } from './router';
import { sdkConfig } from './sdk';

export { localServiceConfig } from './sdk';
export type { UploadRouter } from './router';

let handler: ((request: Request) => Promise<Response>) | null = null;

/**
 * The upload library's route: addresses for the browser (the session and the right to write are checked in the router), and
 * the service's callbacks, which carry no session and are proven by their signature.
 */
export async function handleUploads(request: Request): Promise<Response> {
  try {
    if (!request.headers.has('uploadthing-hook')) refuseCrossSite(request);
    handler ??= createRouteHandler({ router: uploadRouter, config: { ...sdkConfig(), handleDaemonPromise: 'await' } });
    return await handler(request);
  } catch (error) {
    const refused = toAppError(error);
    return Response.json(errorBody(refused), { status: refused.status, headers: { 'cache-control': 'no-store' } });
  }
}

/** For tests that change the environment between cases. */
export function forgetUploads(): void {
  handler = null;
}
