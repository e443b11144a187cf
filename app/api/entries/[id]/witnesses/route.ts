import { z } from 'zod';
import { withAccess } from '@/server/access/route';
import { requestWitnesses } from '@/server/signing/witness-service';

const bodySchema = z.object({ witnessIds: z.array(z.string().max(64)).min(1, 'Choose a witness.').max(20) }).strict();

export const POST = withAccess({ action: 'entry.requestWitness', body: bodySchema }, async ({ scope, body }) => {
  await requestWitnesses(scope, body.witnessIds);
  return null;
});
