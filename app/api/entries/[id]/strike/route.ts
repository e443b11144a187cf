import { withAccess } from '@/server/access/route';
import { strikeOut, strikeSchema } from '@/server/entries/service';

export const POST = withAccess({ action: 'entry.strike', body: strikeSchema }, async ({ scope, body }) => {
  await strikeOut(scope, body.reason);
  return null;
});
