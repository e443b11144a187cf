import { withAccess } from '@/server/access/route';
import { openMailbox } from '@/server/mail/mailbox-service';

/** The local mailbox, only where the demo data is loaded. */
export const GET = withAccess({ action: 'public' }, async () => ({ mails: await openMailbox() }));
