import { withAccess } from '@/server/access/route';
import { addMember, addMemberSchema, listMembers } from '@/server/notebooks/service';

export const GET = withAccess({ action: 'notebook.read', param: 'code' }, async ({ scope }) => ({
  members: await listMembers(scope.notebook.id),
}));
export const POST = withAccess(
  { action: 'notebook.change', param: 'code', body: addMemberSchema },
  async ({ scope, body }) => {
    await addMember(scope, body);
    return null;
  },
);
