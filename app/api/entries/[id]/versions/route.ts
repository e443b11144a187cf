import { z } from 'zod';
import { withAccess } from '@/server/access/route';
import { cutVersion, listVersions } from '@/server/entries/version-service';

const bodySchema = z
  .object({ basedOn: z.number().int().min(1), reason: z.string().trim().max(500).nullable() })
  .strict();

export const GET = withAccess({ action: 'entry.read' }, async ({ scope }) => ({
  versions: await listVersions(scope.entry.id),
}));
export const POST = withAccess({ action: 'entry.write', body: bodySchema }, ({ scope, body }) =>
  cutVersion(scope.entry.id, scope.person, body.basedOn, body.reason || null),
);
