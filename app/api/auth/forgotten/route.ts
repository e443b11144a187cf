import { z } from 'zod';
import { emailSchema } from '@/lib/schemas/person';
import { withAccess } from '@/server/access/route';
import { requestReset } from '@/server/auth/service';

const bodySchema = z.object({ email: emailSchema }).strict();

export const POST = withAccess({ action: 'public', body: bodySchema }, ({ request, body }) =>
  requestReset(request.headers, body.email),
);
