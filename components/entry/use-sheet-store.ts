'use client';

import { useEffect, useState } from 'react';
import { evaluateSheet } from '@/lib/expression/evaluate';
import type { ValueResult } from '@/lib/expression/contract';
import type { TraceDto } from '@/lib/schemas/entry';
import { SheetStore } from '@/components/editor/sheet-context/sheet-store';
import { request, requestColumn } from '@/components/hooks/request';

function newStore(entryId: string): SheetStore {
  return new SheetStore({
    evaluate: evaluateSheet,
    fetchColumn: requestColumn,
    evaluateRemotely: async (body) => {
      const url = `/api/entries/${encodeURIComponent(entryId)}/evaluate`;
      const { results } = await request<{ results: ValueResult[] }>('POST', url, body);
      return results;
    },
    nextFrame: (run) => {
      const frame = requestAnimationFrame(run);
      return () => cancelAnimationFrame(frame);
    },
    delay: (run, ms) => {
      const timer = setTimeout(run, ms);
      return () => clearTimeout(timer);
    },
  });
}

/** The sheet's results, recalculated while writing. */
export function useSheetStore(entryId: string, traces: ReadonlyMap<string, TraceDto>): SheetStore {
  const [store] = useState(() => newStore(entryId));
  useEffect(() => store.setTraces(traces.values()), [store, traces]);
  return store;
}
