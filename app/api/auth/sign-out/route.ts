import { withAccess } from '@/server/access/route';
import { signOut } from '@/server/auth/service';

export const POST = withAccess({ action: 'public' }, ({ request }) => signOut(request.headers));
