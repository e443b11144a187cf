import { withAccess } from '@/server/access/route';
import { noteServed } from '@/server/signing/witness-service';
import { parsedDigest, readColumn } from '@/server/traces/service';
import { binary } from '../../binary';

/** All samples of one column as little-endian binary64, NaN where missing. The bytes never change, so the browser keeps them. */
export const GET = withAccess({ action: 'trace.read' }, async ({ scope, params }) => {
  const index = /^[0-9]{1,3}$/.test(params.index ?? '') ? Number(params.index) : -1;
  if (scope.entry) await noteServed(scope.person.id, scope.entry, scope.traceId);
  const samples = await readColumn(await parsedDigest(scope.traceId), index);
  return binary(new Uint8Array(samples.buffer as ArrayBuffer, samples.byteOffset, samples.byteLength));
});
