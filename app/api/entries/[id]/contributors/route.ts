import { withAccess } from '@/server/access/route';
import { contributorSchema, inviteContributor } from '@/server/entries/service';

export const POST = withAccess({ action: 'entry.invite', body: contributorSchema }, async ({ scope, body }) => {
  await inviteContributor(scope, body.userId);
  return null;
});
