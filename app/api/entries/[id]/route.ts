import { withAccess } from '@/server/access/route';
import { changeFacts, entryFactsSchema } from '@/server/entries/service';
import { readEntry } from '@/server/entries/reading-service';

export const GET = withAccess({ action: 'entry.read' }, ({ scope }) => readEntry(scope));
export const PUT = withAccess({ action: 'entry.write', body: entryFactsSchema }, async ({ scope, body }) => {
  await changeFacts(scope, body);
  return null;
});
