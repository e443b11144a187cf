import { z } from 'zod';
import { withAccess } from '@/server/access/route';
import { issueChallenge } from '@/server/signing/service';

const bodySchema = z.object({ versionDigest: z.string().length(64) }).strict();

export const POST = withAccess({ action: 'entry.sign', body: bodySchema }, ({ scope, body }) =>
  issueChallenge(scope, 'sign', body.versionDigest),
);
