import 'server-only';
import type { TraceNodeAttributes } from '@/lib/document/attributes';
import { walkDocument, type DocumentJson } from '@/lib/document/json';
import { readRecord } from '@/lib/document/version';
import { allows } from '@/server/access/rights';
import type { ScopeOf } from '@/server/access/scope';
import { getDb } from '@/server/db/client';
import * as queries from './queries';

/**
 * What the entry's author says of a trace: handle, settings, spans, view. From the draft for whoever may write it, else from
 * the newest version; null where the trace is not placed in the text.
 */
export async function traceWords(scope: ScopeOf<'trace.read'>): Promise<TraceNodeAttributes | null> {
  const about = scope.entry;
  if (!about) return null;
  const db = await getDb();
  const writes = allows('entry.write', { role: scope.notebook.role, entry: about });
  let doc: DocumentJson | null = null;
  if (writes) doc = (await queries.findDraft(db, about.id)).doc;
  else if (about.headSeq > 0) {
    const version = await queries.findVersion(db, about.id, about.headSeq);
    if (version) doc = readRecord(version.canonical).document as DocumentJson;
  }
  let found: TraceNodeAttributes | null = null;
  if (doc) {
    walkDocument(doc, (node) => {
      if (node.type === 'trace' && node.attrs?.traceId === scope.traceId) found = node.attrs as TraceNodeAttributes;
    });
  }
  return found;
}
