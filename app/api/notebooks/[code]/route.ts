import { withAccess } from '@/server/access/route';
import { changeNotebook, notebookFactsSchema } from '@/server/notebooks/service';

export const PUT = withAccess(
  { action: 'notebook.change', param: 'code', body: notebookFactsSchema },
  async ({ scope, body }) => {
    await changeNotebook(scope, body);
    return null;
  },
);
