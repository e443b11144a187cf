import { requestColumn } from '@/components/hooks/request';
import { traceSource } from '@/components/editor/sheet-context/trace-source';
import type { TraceNodeAttributes } from '@/lib/document/attributes';
import { walkDocument, type DocumentJson } from '@/lib/document/json';
import type { CellSource, DerivedColumn, RawColumn } from '@/lib/expression/contract';
import { evaluateSheet } from '@/lib/expression/evaluate';
import type { TraceDto } from '@/lib/schemas/entry';

/**
 * The samples of a version's derived columns, by symbol (`t1.P`): results are bound with a version, samples are not, so
 * they are made again from the raw files for a plot of them. Its own module, so that the engine is fetched only then.
 *
 * @throws AppError, Unreachable where a raw column cannot be fetched
 */
export async function recalculateColumns(
  doc: DocumentJson,
  traces: ReadonlyMap<string, TraceDto>,
): Promise<Map<string, DerivedColumn>> {
  const cells: CellSource[] = [];
  const nodes: TraceNodeAttributes[] = [];
  walkDocument(doc, ({ type, attrs }) => {
    if (type === 'trace') nodes.push(attrs as TraceNodeAttributes);
    if (type !== 'value') return;
    const { id, source, unit, digits } = attrs as CellSource;
    if (source.trim() !== '') cells.push({ id, source, unit, digits });
  });
  const held = new Map<string, RawColumn>();
  for (;;) {
    const waiting: Promise<unknown>[] = [];
    const fetched = (trace: TraceDto, index: number): RawColumn => {
      const key = `${trace.sha256}/${index}`;
      const known = held.get(key);
      if (known !== undefined) return known;
      held.set(key, 'pending');
      waiting.push(requestColumn(trace.id, index).then((values) => held.set(key, values)));
      return 'pending';
    };
    const sheet = evaluateSheet({
      cells,
      traces: nodes.map((node) => traceSource(node, traces.get(node.traceId), fetched)),
    });
    // An evaluation asks for columns as it comes to need them; one that asked for none has all there are.
    if (waiting.length === 0) return sheet.columns;
    await Promise.all(waiting);
  }
}
