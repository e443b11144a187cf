import { z } from 'zod';
import { withAccess } from '@/server/access/route';
import { rescueAppointment } from '@/server/notebooks/service';

const bodySchema = z.object({ code: z.string().max(40), userId: z.string().max(64) }).strict();

export const POST = withAccess({ action: 'installation.administer', body: bodySchema }, async ({ scope, body }) => {
  await rescueAppointment(scope.person, body.code, body.userId);
  return null;
});
