import { z } from 'zod';
import { withAccess } from '@/server/access/route';
import { noteServed } from '@/server/signing/witness-service';
import { parsedDigest, readRows } from '@/server/traces/service';

const query = z.object({
  from: z.coerce.number().int().min(0).default(0),
  count: z.coerce.number().int().min(1).max(1000).default(200),
});

export const GET = withAccess({ action: 'trace.read', query }, async ({ scope, query: { from, count } }) => {
  const page = await readRows(await parsedDigest(scope.traceId), from, count);
  if (scope.entry) await noteServed(scope.person.id, scope.entry, scope.traceId);
  return page;
});
