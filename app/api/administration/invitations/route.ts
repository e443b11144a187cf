import { z } from 'zod';
import { emailSchema, installationRoles, personNameSchema } from '@/lib/schemas/person';
import { takeTurn } from '@/server/access/rate';
import { withAccess } from '@/server/access/route';
import { invite } from '@/server/accounts/service';

const bodySchema = z.object({ email: emailSchema, name: personNameSchema, role: z.enum(installationRoles) }).strict();

export const POST = withAccess({ action: 'installation.administer', body: bodySchema }, async ({ scope, body }) => {
  await takeTurn(`invite:${scope.person.id}`, 100, 3600);
  // The link goes by mail alone: an administrator who could read it could join in another person's name.
  const { id } = await invite(scope.person, body);
  return { id };
});
