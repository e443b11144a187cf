import type { PlotView } from '@/lib/plot/view';

/** Ranges of axes from what is drawn. */

export type Range = [number, number];

function widen(low: number, high: number, log: boolean): Range {
  if (log) return low === high ? [low / 2, high * 2] : [low, high];
  if (low === high) return low === 0 ? [-1, 1] : [low - Math.abs(low) * 0.1, high + Math.abs(high) * 0.1];
  return [low, high];
}

/** Extent of the drawn x, or null where there is nothing to draw (on a logarithmic axis only positive values count). */
export function xExtent(views: PlotView[], log: boolean): Range | null {
  return extent(
    views.map(({ x }) => x),
    log,
  );
}

/** Extent of the drawn y within a range of x, with a margin of 4 %. */
export function yExtent(views: PlotView[], within: Range, log: boolean): Range | null {
  let low = Infinity;
  let high = -Infinity;
  for (const { x, min, max } of views) {
    for (let i = 0; i < x.length; i += 1) {
      if (!(x[i] >= within[0] && x[i] <= within[1])) continue;
      if (min[i] < low && (!log || min[i] > 0)) low = min[i];
      if (max[i] > high) high = max[i];
      if (log && max[i] > 0 && max[i] < low) low = max[i];
    }
  }
  if (!(low <= high)) return null;
  if (log) return widen(low, high, true);
  const [from, to] = widen(low, high, false);
  const margin = (to - from) * 0.04;
  return [from - margin, to + margin];
}

function extent(parts: Float64Array[], log: boolean): Range | null {
  let low = Infinity;
  let high = -Infinity;
  for (const part of parts) {
    for (const value of part) {
      if (log && !(value > 0)) continue;
      if (value < low) low = value;
      if (value > high) high = value;
    }
  }
  return low <= high ? widen(low, high, log) : null;
}

/** The range scaled about a centre: factor below 1 zooms in. */
export function zoomRange([from, to]: Range, centre: number, factor: number, log: boolean): Range {
  if (!log) return [centre - (centre - from) * factor, centre + (to - centre) * factor];
  const turn = Math.log(centre);
  return [Math.exp(turn - (turn - Math.log(from)) * factor), Math.exp(turn + (Math.log(to) - turn) * factor)];
}

/** The range moved by a share of its width. */
export function panRange([from, to]: Range, share: number, log: boolean): Range {
  if (!log) return [from + (to - from) * share, to + (to - from) * share];
  const step = (to / from) ** share;
  return [from * step, to * step];
}

/** Index of the drawn point whose x is nearest; -1 where there is none. */
export function nearestPoint(view: PlotView | undefined, x: number): number {
  let best = -1;
  let distance = Infinity;
  if (!view) return best;
  for (let i = 0; i < view.x.length; i += 1) {
    const gap = Math.abs(view.x[i] - x);
    if (gap < distance) {
      distance = gap;
      best = i;
    }
  }
  return best;
}
