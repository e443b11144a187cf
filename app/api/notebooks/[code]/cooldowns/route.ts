import { cooldownSchema } from '@/lib/schemas/laboratory';
import { withAccess } from '@/server/access/route';
import { createCooldown, listCooldowns } from '@/server/cooldowns/service';

export const GET = withAccess({ action: 'notebook.read', param: 'code' }, async ({ scope }) => ({
  cooldowns: await listCooldowns(scope.person.id, scope.notebook.id),
}));
export const POST = withAccess({ action: 'cooldown.create', param: 'code', body: cooldownSchema }, ({ scope, body }) =>
  createCooldown(scope.notebook.id, scope.person.id, body),
);
