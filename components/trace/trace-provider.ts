import { serverProvider, type PlotProvider } from '@/components/plot/provider';
import type { TraceSettings } from '@/lib/document/attributes';
import type { TraceDto } from '@/lib/schemas/entry';

/** The samples of a received file, under the symbols and units that its author stated. */
export function traceProvider(file: TraceDto, columns: TraceSettings['columns']): PlotProvider {
  const axes = columns.map(({ symbol, unit }, i) => ({
    symbol,
    unit,
    min: file.columns[i]?.min ?? null,
    max: file.columns[i]?.max ?? null,
  }));
  return serverProvider(file.id, file.rows, axes);
}
