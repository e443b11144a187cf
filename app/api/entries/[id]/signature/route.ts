import { signSchema } from '@/lib/schemas/signing';
import { withAccess } from '@/server/access/route';
import { sign } from '@/server/signing/service';

export const POST = withAccess({ action: 'entry.sign', body: signSchema }, ({ scope, body }) => sign(scope, body));
