import { z } from 'zod';
import { passwordSchema } from '@/lib/schemas/person';
import { withAccess } from '@/server/access/route';
import { resetPassword } from '@/server/auth/service';

const bodySchema = z.object({ token: z.string().min(1).max(200), password: passwordSchema }).strict();

export const POST = withAccess({ action: 'public', body: bodySchema }, ({ request, body }) =>
  resetPassword(request.headers, body),
);
