'use client';

import { createContext, useContext, useSyncExternalStore } from 'react';
import type { ValueResult } from '@/lib/expression/contract';
import type { PersonDto, TraceDto } from '@/lib/schemas/entry';
import type { SheetStore } from './sheet-store';

/** What the provenance column shows: a value or trace, or the block that the cursor stands in. */
export type Focus = { kind: 'value' | 'trace' | 'block'; id: string; blockId: string | null; quote: string };

/** Results of a sheet's values, whether a version has bound them or they are recalculated. */
export type SheetResults = Pick<SheetStore, 'subscribe' | 'result' | 'results'>;

export type SheetContextValue = {
  entryId: string;
  mode: 'write' | 'read';
  person: PersonDto | null;
  store: SheetResults;
  /** Recalculates while the entry is written; null where a version is read. */
  live: SheetStore | null;
  /** Markup of equations that came with the page, by `equationKey`. */
  equations: Readonly<Record<string, string>>;
  traces: ReadonlyMap<string, TraceDto>;
  focus: Focus | null;
  setFocus: (focus: Focus | null) => void;
};

const SheetContext = createContext<SheetContextValue | null>(null);

export const SheetProvider = SheetContext.Provider;

export function useSheet(): SheetContextValue {
  const sheet = useContext(SheetContext);
  if (!sheet) throw new Error('A part of the sheet stands outside of it.');
  return sheet;
}

/** The result of one value, again whenever it changes. */
export function useResult(id: string): ValueResult | undefined {
  const { store } = useSheet();
  return useSyncExternalStore(
    store.subscribe,
    () => store.result(id),
    () => store.result(id),
  );
}

export function useTrace(traceId: string): TraceDto | undefined {
  return useSheet().traces.get(traceId);
}
