import { withAccess } from '@/server/access/route';
import { env } from '@/server/env/env';
import { toPersonDto } from '@/server/people/service';

export const GET = withAccess({ action: 'public' }, async ({ scope }) => ({
  person: scope.person ? toPersonDto(scope.person) : null,
  serverTime: new Date().toISOString(),
  demo: env().demo,
}));
