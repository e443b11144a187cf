import { z } from 'zod';
import { withAccess } from '@/server/access/route';
import { beginSecondFactor, confirmSecondFactor, endSecondFactor } from '@/server/auth/service';

const passwordBody = z.object({ password: z.string().min(1, 'Give your password.').max(200) }).strict();
const codeBody = z
  .object({
    code: z
      .string()
      .trim()
      .regex(/^\d{6}$/, 'The code has six digits.'),
  })
  .strict();

export const POST = withAccess({ action: 'self', body: passwordBody }, ({ request, scope, body }) =>
  beginSecondFactor(request.headers, scope.person, body.password),
);
export const PUT = withAccess({ action: 'self', body: codeBody }, ({ request, scope, body }) =>
  confirmSecondFactor(request.headers, scope.person, body.code),
);
export const DELETE = withAccess({ action: 'self', body: passwordBody }, ({ request, scope, body }) =>
  endSecondFactor(request.headers, scope.person, body.password),
);
