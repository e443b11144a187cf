import { withAccess } from '@/server/access/route';
import { readVersion } from '@/server/entries/version-service';

export const GET = withAccess({ action: 'entry.read' }, ({ scope, params }) =>
  readVersion(scope.entry.id, Number(params.seq) || 0),
);
