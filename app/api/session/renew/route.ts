import { z } from 'zod';
import { emailSchema } from '@/lib/schemas/person';
import { withAccess } from '@/server/access/route';
import { signIn } from '@/server/auth/service';

const bodySchema = z
  .object({ email: emailSchema, password: z.string().min(1, 'Give your password.').max(200) })
  .strict();

export const POST = withAccess({ action: 'public', body: bodySchema }, ({ request, body }) =>
  signIn(request.headers, body),
);
