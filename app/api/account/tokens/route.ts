import { z } from 'zod';
import { withAccess } from '@/server/access/route';
import { makeToken } from '@/server/accounts/service';

const bodySchema = z.object({ label: z.string().trim().min(1, 'Say what the token is for.').max(80) }).strict();

export const POST = withAccess({ action: 'self', body: bodySchema }, ({ scope, body }) =>
  makeToken(scope.person.id, body.label),
);
