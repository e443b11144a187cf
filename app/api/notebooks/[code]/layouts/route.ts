import { withAccess } from '@/server/access/route';
import { listLayouts, saveLayout, saveLayoutSchema } from '@/server/layouts/service';

export const GET = withAccess({ action: 'notebook.read', param: 'code' }, async ({ scope }) => ({
  layouts: await listLayouts(scope.notebook.id),
}));
export const POST = withAccess({ action: 'layout.save', param: 'code', body: saveLayoutSchema }, ({ scope, body }) =>
  saveLayout(scope, body),
);
