import { withAccess } from '@/server/access/route';
import { traceDetail } from '@/server/traces/service';

export const GET = withAccess({ action: 'trace.read' }, ({ scope }) => traceDetail(scope.traceId));
