import { saveDraftSchema } from '@/lib/schemas/entry';
import { withAccess } from '@/server/access/route';
import { readDraft, saveDraft } from '@/server/entries/draft-service';

export const GET = withAccess({ action: 'entry.write' }, ({ scope }) => readDraft(scope.entry.id));
export const PUT = withAccess(
  { action: 'entry.write', body: saveDraftSchema, maxBytes: 5_000_000 },
  ({ scope, body }) => saveDraft(scope.entry.id, scope.person, body),
);
