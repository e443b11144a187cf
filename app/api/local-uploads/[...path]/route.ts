import { handleUploadService } from '@/fakes/upload-service/service';
import { localServiceConfig } from '@/server/uploads/service';

export const dynamic = 'force-dynamic';
export const maxDuration = 3600;

/** The local stand-in for the upload service: every address is signed and every call of our own carries its key. */
async function serve(request: Request): Promise<Response> {
  const config = localServiceConfig();
  if (!config)
    return Response.json({ error: 'A hosted upload service is set up; nothing lies here.' }, { status: 404 });
  return handleUploadService(request, config);
}

const route = Object.assign(serve, { action: 'public' as const });

export { route as GET, route as HEAD, route as POST, route as PUT };
