import { withAccess } from '@/server/access/route';
import { endSession } from '@/server/accounts/service';

export const DELETE = withAccess({ action: 'self' }, async ({ scope, params }) => {
  await endSession(scope.person, params.sessionId);
  return null;
});
