import { z } from 'zod';
import { withAccess } from '@/server/access/route';
import { restoreVersion } from '@/server/entries/version-service';

const bodySchema = z.object({ basedOn: z.number().int().min(1) }).strict();

export const POST = withAccess({ action: 'entry.write', body: bodySchema }, ({ scope, params, body }) =>
  restoreVersion(scope.entry.id, scope.person, Number(params.seq) || 0, body.basedOn),
);
