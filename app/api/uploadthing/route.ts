import { handleUploads } from '@/server/uploads/service';

export const dynamic = 'force-dynamic';

// The library's router authorises each upload (`entry.write` on its entry) and proves the service's callbacks by their signature.
const route = Object.assign((request: Request) => handleUploads(request), { action: 'entry.write' as const });

export { route as GET, route as POST };
