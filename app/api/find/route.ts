import { z } from 'zod';
import { takeTurn } from '@/server/access/rate';
import { withAccess } from '@/server/access/route';
import { find } from '@/server/find/service';

const querySchema = z.object({ q: z.string().max(200) });

export const GET = withAccess({ action: 'self.read', query: querySchema }, async ({ scope, query }) => {
  await takeTurn(`find:${scope.person.id}`, 600, 60);
  return { results: await find(scope.person.id, query.q) };
});
