import { withAccess } from '@/server/access/route';
import { createEntry, newEntrySchema } from '@/server/entries/service';
import { listEntries } from '@/server/entries/reading-service';

export const GET = withAccess({ action: 'notebook.read', param: 'code' }, async ({ scope }) => ({
  entries: await listEntries(scope.person.id, { notebookId: scope.notebook.id }),
}));
export const POST = withAccess({ action: 'entry.create', param: 'code', body: newEntrySchema }, ({ scope, body }) =>
  createEntry(scope, body),
);
