import { attachmentHeader } from '@/lib/trace-format/file-name';
import { withAccess } from '@/server/access/route';
import { noteServed } from '@/server/signing/witness-service';
import { storedFile } from '@/server/traces/service';

/** The bytes as they were received: always a download, never a page of this origin, whatever the file says it is. */
export const GET = withAccess({ action: 'trace.read' }, async ({ scope }) => {
  const { content, bytes, fileName } = await storedFile(scope.traceId, 'trace');
  if (scope.entry) await noteServed(scope.person.id, scope.entry, scope.traceId);
  return new Response(content, {
    headers: {
      'content-type': 'application/octet-stream',
      'content-length': String(bytes),
      'content-disposition': attachmentHeader(fileName),
      'content-security-policy': "default-src 'none'; sandbox",
      'cross-origin-resource-policy': 'same-origin',
      'x-content-type-options': 'nosniff',
      'cache-control': 'private, no-store',
    },
  });
});
