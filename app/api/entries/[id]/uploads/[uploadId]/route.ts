import { AppError } from '@/lib/errors/app-error';
import { uploadIdSchema } from '@/lib/schemas/upload';
import { withAccess } from '@/server/access/route';
import { receivedUpload } from '@/server/traces/service';

/** Whether an upload of the caller has arrived already: asked before sending again after a lost answer. */
export const GET = withAccess({ action: 'entry.write' }, async ({ scope, params }) => {
  const uploadId = uploadIdSchema.safeParse(params.uploadId);
  const outcome = uploadId.success
    ? await receivedUpload({ personId: scope.person.id, entryId: scope.entry.id, uploadId: uploadId.data })
    : null;
  if (!outcome) throw new AppError('not_found', 'This upload has not arrived.');
  return outcome;
});
