import { withAccess } from '@/server/access/route';
import { revokeToken } from '@/server/accounts/service';

export const DELETE = withAccess({ action: 'self' }, async ({ scope, params }) => {
  await revokeToken(scope.person, params.tokenId);
  return null;
});
