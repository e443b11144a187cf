import type { TraceNodeAttributes } from '@/lib/document/attributes';
import type { RawColumn, TraceSource } from '@/lib/expression/contract';
import type { TraceDto } from '@/lib/schemas/entry';

/** Above this many rows a column is not sent to the browser; the server evaluates what depends on it. */
export const longestLocalTrace = 2_000_000;

/** A trace of the document as the evaluation takes it. `fetched` gives a column's samples, or says that they are under way. */
export function traceSource(
  node: TraceNodeAttributes,
  trace: TraceDto | undefined,
  fetched: (trace: TraceDto, index: number) => RawColumn,
): TraceSource {
  return {
    traceId: node.traceId,
    handle: node.handle,
    fileName: trace?.fileName ?? '',
    digest: trace?.sha256 ?? node.traceId,
    rows: trace?.rows ?? 0,
    settings: node.settings,
    spans: node.spans,
    column: (index) => {
      if (!trace) return 'pending';
      if (trace.state === 'unreadable') return { error: trace.problem ?? 'The file could not be read as a trace.' };
      if (trace.state === 'received' || trace.rows > longestLocalTrace) return 'pending';
      return fetched(trace, index);
    },
  };
}
