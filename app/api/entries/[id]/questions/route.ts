import { takeTurn } from '@/server/access/rate';
import { withAccess } from '@/server/access/route';
import { ask, askSchema } from '@/server/questions/service';

export const POST = withAccess({ action: 'entry.ask', body: askSchema }, async ({ scope, body }) => {
  await takeTurn(`ask:${scope.person.id}`, 120, 600);
  return ask(scope, body);
});
