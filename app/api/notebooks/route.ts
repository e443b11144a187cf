import { withAccess } from '@/server/access/route';
import { foundNotebook, listNotebooks, newNotebookSchema } from '@/server/notebooks/service';

export const GET = withAccess({ action: 'self.read' }, async ({ scope }) => ({
  notebooks: await listNotebooks(scope.person.id),
}));
export const POST = withAccess({ action: 'notebook.found', body: newNotebookSchema }, ({ scope, body }) =>
  foundNotebook(scope.person, body),
);
