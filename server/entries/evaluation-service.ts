import 'server-only';
import type { CellSource, ValueResult } from '@/lib/expression/contract';
import { getDb } from '@/server/db/client';
import { evaluateOnServer, type NamedTrace } from '@/server/evaluation/service';
import { filesOf } from './queries';

export type ServerEvaluation = {
  engine: string;
  results: ValueResult[];
  columns: { symbol: string; handle: string; unit: string; rows: number }[];
};

/** Evaluates an unsaved sheet over this entry's received traces, for browsers that do not hold the samples. */
export async function evaluateForEntry(
  entryId: string,
  cells: CellSource[],
  traces: NamedTrace[],
): Promise<ServerEvaluation> {
  const files = await filesOf(await getDb(), entryId);
  const sheet = await evaluateOnServer(cells, traces, new Map(files.map((file) => [file.id, file])));
  return {
    engine: sheet.engine,
    results: [...sheet.results.values()],
    columns: [...sheet.columns.values()].map(({ symbol, handle, unit, values }) => ({
      symbol,
      handle,
      unit,
      rows: values.length,
    })),
  };
}
