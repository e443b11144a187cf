import { withAccess } from '@/server/access/route';
import { changeMember, changeMemberSchema } from '@/server/notebooks/service';

export const PUT = withAccess(
  { action: 'notebook.change', param: 'code', body: changeMemberSchema },
  async ({ scope, params, body }) => {
    await changeMember(scope, params.userId, body.role);
    return null;
  },
);
export const DELETE = withAccess({ action: 'notebook.change', param: 'code' }, async ({ scope, params }) => {
  await changeMember(scope, params.userId, null);
  return null;
});
