'use client';

import { useRef, type KeyboardEvent } from 'react';
import type { PlotView } from '@/lib/plot/view';
import { nearestPoint, type Range } from './scale';

type Keys = {
  view: PlotView | undefined;
  range: Range | null;
  cursor: number | null;
  onCursor: (x: number | null) => void;
  onZoom: (factor: number) => void;
  onPan: (share: number) => void;
  onReset: () => void;
  /** Gets the two ends of a span set at the cursor; null where spans are only shown. */
  onSpan: ((range: Range) => void) | null;
};

/** Keys of a plot: the same as the mouse can do. */
export function usePlotKeys(keys: Keys): (event: KeyboardEvent) => void {
  const begun = useRef<number | null>(null);
  return (event) => {
    if (event.target !== event.currentTarget || event.ctrlKey || event.metaKey || event.altKey) return;
    const { view, range, cursor } = keys;
    const move = (step: number) => {
      if (!view || view.x.length === 0 || !range) return;
      const at = cursor === null ? nearestPoint(view, (range[0] + range[1]) / 2) : nearestPoint(view, cursor) + step;
      const x = view.x[Math.max(0, Math.min(view.x.length - 1, at))];
      if (!Number.isNaN(x)) keys.onCursor(x);
    };
    const far = event.shiftKey ? 20 : 1;
    switch (event.key) {
      case 'ArrowLeft':
        move(-far);
        break;
      case 'ArrowRight':
        move(far);
        break;
      case 'Home':
        if (view) keys.onCursor(view.x[0] ?? null);
        break;
      case 'End':
        if (view) keys.onCursor(view.x[view.x.length - 1] ?? null);
        break;
      case '+':
      case '=':
        keys.onZoom(0.5);
        break;
      case '-':
        keys.onZoom(2);
        break;
      case ',':
        keys.onPan(-0.25);
        break;
      case '.':
        keys.onPan(0.25);
        break;
      case '0':
        keys.onReset();
        break;
      case 's':
        if (!keys.onSpan || cursor === null) return;
        if (begun.current === null) {
          begun.current = cursor;
        } else {
          keys.onSpan([begun.current, cursor]);
          begun.current = null;
        }
        break;
      case 'Escape':
        if (begun.current === null && cursor === null) return;
        begun.current = null;
        keys.onCursor(null);
        break;
      default:
        return;
    }
    event.preventDefault();
    event.stopPropagation();
  };
}
