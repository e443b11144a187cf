'use client';

import { useEffect, useState } from 'react';
import type { DerivedValues } from '@/components/plot/derived-provider';
import type { SheetStore } from './sheet-store';

const same = (a: DerivedValues[], b: DerivedValues[]) =>
  a.length === b.length &&
  a.every(({ symbol, unit, values }, i) => symbol === b[i].symbol && unit === b[i].unit && values === b[i].values);

/** Columns that values of the entry have made of a trace, by their name within it (`P` of `t1.P`). */
export function useDerived(store: SheetStore | null, handle: string): DerivedValues[] {
  const [derived, setDerived] = useState<DerivedValues[]>([]);
  useEffect(() => {
    if (!store) return;
    const read = () => {
      const next = store
        .columnsOf(handle)
        .map(({ symbol, unit, values }) => ({ symbol: symbol.slice(handle.length + 1), unit, values }));
      setDerived((last) => (same(last, next) ? last : next));
    };
    read();
    return store.subscribe(read);
  }, [store, handle]);
  return derived;
}
