import { z } from 'zod';
import { encodeView } from '@/lib/plot/view';
import { withAccess } from '@/server/access/route';
import { noteServed } from '@/server/signing/witness-service';
import { parsedDigest, readView } from '@/server/traces/service';
import { binary } from '../binary';

const column = z.coerce.number().int().min(0).max(255);
const query = z.object({
  /** Column of the horizontal axis; left out: the row number. */
  x: column.optional(),
  y: column,
  from: z.coerce.number().optional(),
  to: z.coerce.number().optional(),
  pixels: z.coerce.number().int().min(16).max(8192),
});

/** What a plot shows, as lib/plot/view encodes it; its bytes are proportional to the pixels, not to the trace. */
export const GET = withAccess({ action: 'trace.read', query }, async ({ scope, query: wanted }) => {
  const { x, y, from, to, pixels } = wanted;
  const view = await readView(await parsedDigest(scope.traceId), {
    x: x ?? null,
    y,
    from: from ?? null,
    to: to ?? null,
    pixels,
  });
  if (scope.entry) await noteServed(scope.person.id, scope.entry, scope.traceId);
  return binary(encodeView(view));
});
