import { withAccess } from '@/server/access/route';
import { createEntry, listEntries, newEntrySchema } from '@/server/entries/service';

export const GET = withAccess({ action: 'notebook.read', param: 'code' }, async ({ scope }) => ({
  entries: await listEntries(scope.person.id, { notebookId: scope.notebook.id }),
}));
export const POST = withAccess({ action: 'entry.create', param: 'code', body: newEntrySchema }, ({ scope, body }) =>
  createEntry(scope, body),
);
