import { withAccess } from '@/server/access/route';
import { readAuditTrail } from '@/server/notebooks/service';

export const GET = withAccess({ action: 'notebook.audit', param: 'code' }, async ({ scope }) => ({
  records: await readAuditTrail(scope.notebook.id),
}));
