import { z } from 'zod';
import { cooldownSchema } from '@/lib/schemas/laboratory';
import { withAccess } from '@/server/access/route';
import { changeCooldown, readCooldown } from '@/server/cooldowns/service';

const bodySchema = z.object({ revision: z.number().int(), cooldown: cooldownSchema }).strict();

export const GET = withAccess({ action: 'cooldown.read' }, ({ scope }) => readCooldown(scope.cooldownId));
export const PUT = withAccess({ action: 'cooldown.change', body: bodySchema }, ({ scope, body }) =>
  changeCooldown({ cooldownId: scope.cooldownId, notebookId: scope.notebook.id }, body.revision, body.cooldown),
);
