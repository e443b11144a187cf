'use client';

import { useEffect, useState } from 'react';
import type { PlotView } from '@/lib/plot/view';
import type { PlotProvider } from './provider';

export type Views = { views: PlotView[]; x: string | null; y: string[]; problem: string | null; loading: boolean };

/**
 * The views of several columns over one range. The last ones stay until new ones have arrived, so that zooming never blanks
 * the plot.
 */
export function useViews(
  provider: PlotProvider,
  x: string | null,
  y: string[],
  range: [number, number] | null,
  pixels: number,
): Views {
  const [state, setState] = useState<Views>({ views: [], x, y: [], problem: null, loading: true });
  const wanted = y.join(' ');
  const [from, to] = range ?? [null, null];
  useEffect(() => {
    let stale = false;
    const names = wanted === '' ? [] : wanted.split(' ');
    // A drag asks many times a second; the last question is enough.
    const timer = setTimeout(() => {
      setState((last) => ({ ...last, loading: true }));
      Promise.all(names.map((name) => provider.view(x, name, { from, to, pixels }))).then(
        (views) => {
          if (!stale) setState({ views, x, y: names, problem: null, loading: false });
        },
        (error: unknown) => {
          if (!stale)
            setState((last) => ({
              ...last,
              loading: false,
              problem: error instanceof Error ? error.message : String(error),
            }));
        },
      );
    }, 30);
    return () => {
      stale = true;
      clearTimeout(timer);
    };
  }, [provider, x, wanted, from, to, pixels]);
  return state;
}
