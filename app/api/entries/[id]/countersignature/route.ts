import { signSchema } from '@/lib/schemas/signing';
import { withAccess } from '@/server/access/route';
import { countersign } from '@/server/signing/service';

export const POST = withAccess({ action: 'entry.countersign', body: signSchema }, ({ scope, body }) =>
  countersign(scope, body),
);
