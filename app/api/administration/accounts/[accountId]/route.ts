import { z } from 'zod';
import { installationRoles } from '@/lib/schemas/person';
import { withAccess } from '@/server/access/route';
import { changeAccount } from '@/server/accounts/service';

const bodySchema = z.object({ disabled: z.boolean().optional(), role: z.enum(installationRoles).optional() }).strict();

export const PATCH = withAccess(
  { action: 'installation.administer', body: bodySchema },
  async ({ scope, params, body }) => {
    await changeAccount(scope.person, params.accountId, body);
    return null;
  },
);
