import { AppError } from '@/lib/errors/app-error';
import { saveDraftSchema } from '@/lib/schemas/entry';
import { withAccess } from '@/server/access/route';
import { readDraft, saveDraft } from '@/server/entries/draft-service';

export const GET = withAccess({ action: 'entry.write' }, ({ scope }) => readDraft(scope.entry.id));
export const PUT = withAccess(
  { action: 'entry.write', body: saveDraftSchema, maxBytes: 5_000_000 },
  ({ request, scope, body }) => {
    // A window says whose text it sends: after another person's sign-in in this browser it must not pass as theirs.
    const writer = request.headers.get('x-kelvinleaf-writer');
    if (writer !== null && writer !== scope.person.id) {
      throw new AppError(
        'signed_out',
        `You are signed in as ${scope.person.name}, and this text is somebody else’s. It is kept in this browser until its writer signs in again.`,
      );
    }
    return saveDraft(scope.entry.id, scope.person, body);
  },
);
