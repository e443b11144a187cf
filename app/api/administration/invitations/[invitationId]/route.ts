import { withAccess } from '@/server/access/route';
import { withdrawInvitation } from '@/server/accounts/service';

export const DELETE = withAccess({ action: 'installation.administer' }, async ({ params }) => {
  await withdrawInvitation(params.invitationId);
  return null;
});
