import { z } from 'zod';
import { withAccess } from '@/server/access/route';
import { finishSecondFactor } from '@/server/auth/service';

const bodySchema = z
  .object({ code: z.string().trim().min(6, 'Give the code.').max(20), recovery: z.boolean() })
  .strict();

export const POST = withAccess({ action: 'public', body: bodySchema }, ({ request, body }) =>
  finishSecondFactor(request.headers, body),
);
