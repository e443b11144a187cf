import 'server-only';
import type { TraceNodeAttributes, ValueNodeAttributes } from '@/lib/document/attributes';
import { walkDocument, type DocumentJson } from '@/lib/document/json';
import type { CellSource, Sheet, TraceSource } from '@/lib/expression/contract';
import { evaluateSheet } from '@/lib/expression/evaluate';
import { readColumn } from '@/server/traces/service';

/** Facts of a received file that a calculation needs. */
export type TraceFacts = {
  id: string;
  fileName: string;
  sha256: string;
  rows: number;
  state: string;
  problem: string | null;
};

export type NamedTrace = Pick<TraceNodeAttributes, 'traceId' | 'handle' | 'settings' | 'spans'>;

/** Cells and traces of a document, in reading order. */
export function partsOf(doc: DocumentJson): { cells: (CellSource & { shown: string | null })[]; traces: NamedTrace[] } {
  const cells: (CellSource & { shown: string | null })[] = [];
  const traces: NamedTrace[] = [];
  walkDocument(doc, (node) => {
    if (node.type === 'value') {
      const { id, source, unit, digits, shown } = node.attrs as ValueNodeAttributes;
      cells.push({ id, source, unit, digits, shown });
    }
    if (node.type === 'trace') {
      const { traceId, handle, settings, spans } = node.attrs as TraceNodeAttributes;
      traces.push({ traceId, handle, settings, spans });
    }
  });
  return { cells, traces };
}

/**
 * Evaluates cells over stored traces. Only columns that a cell names are read from disk. A trace that is not in `facts`
 * (another entry's, or one that was never received) has no data, and the cells that use it say so.
 */
export async function evaluateOnServer(
  cells: CellSource[],
  traces: NamedTrace[],
  facts: Map<string, TraceFacts>,
): Promise<Sheet> {
  const texts = cells.map((cell) => cell.source).join('\n');
  const sources: TraceSource[] = [];
  for (const trace of traces) {
    const known = facts.get(trace.traceId);
    const columns = new Map<number, Float64Array>();
    if (known?.state === 'parsed') {
      const spanAxes = new Set(trace.spans.map((span) => span.axis));
      for (const [index, column] of trace.settings.columns.entries()) {
        const named = texts.includes(`${trace.handle}.${column.symbol}`) || spanAxes.has(column.symbol);
        if (named) columns.set(index, await readColumn(known.sha256, index));
      }
    }
    sources.push({
      ...trace,
      fileName: known?.fileName ?? '',
      digest: known?.sha256 ?? '',
      rows: known?.rows ?? 0,
      column: (index) =>
        columns.get(index) ?? {
          error: known
            ? (known.problem ?? 'The file is still being read.')
            : 'The file of this trace is not in this entry.',
        },
    });
  }
  return evaluateSheet({ cells, traces: sources });
}
