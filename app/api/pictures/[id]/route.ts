import { attachmentHeader } from '@/lib/trace-format/file-name';
import { withAccess } from '@/server/access/route';
import { storedFile } from '@/server/traces/service';

/** A picture, of a type that its content proved when it was received (PNG, JPEG, GIF, WebP). */
export const GET = withAccess({ action: 'trace.read' }, async ({ scope }) => {
  const { content, bytes, fileName, mediaType } = await storedFile(scope.traceId, 'picture');
  return new Response(content, {
    headers: {
      'content-type': mediaType,
      'content-length': String(bytes),
      'content-disposition': attachmentHeader(fileName),
      'content-security-policy': "default-src 'none'; sandbox",
      'cross-origin-resource-policy': 'same-origin',
      'x-content-type-options': 'nosniff',
      'cache-control': 'private, max-age=300',
    },
  });
});
