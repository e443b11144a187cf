import { z } from 'zod';
import { emailSchema, passwordSchema, personNameSchema } from '@/lib/schemas/person';
import { clientAddress, takeTurn } from '@/server/access/rate';
import { withAccess } from '@/server/access/route';
import { acceptInvitation } from '@/server/accounts/service';
import { signIn } from '@/server/auth/service';

const bodySchema = z
  .object({
    token: z.string().min(1).max(200),
    name: personNameSchema,
    password: passwordSchema,
    email: emailSchema.optional(),
  })
  .strict();

export const POST = withAccess({ action: 'public', body: bodySchema }, async ({ request, body }) => {
  await takeTurn(`join:${clientAddress(request.headers)}`, 30, 600);
  const { email } = await acceptInvitation(body.token, body.name, body.password, body.email);
  return signIn(request.headers, { email, password: body.password });
});
