import { z } from 'zod';
import { passwordSchema } from '@/lib/schemas/person';
import { withAccess } from '@/server/access/route';
import { changePassword } from '@/server/accounts/service';

const bodySchema = z
  .object({ current: z.string().min(1, 'Give your present password.').max(200), next: passwordSchema })
  .strict();

export const PUT = withAccess({ action: 'self', body: bodySchema }, async ({ scope, body }) => {
  await changePassword(scope.person, body.current, body.next);
  return null;
});
