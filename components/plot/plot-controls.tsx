'use client';

import { useId } from 'react';
import type { TraceView } from '@/lib/document/attributes';
import { axisLabel } from '@/lib/plot/axis';
import type { PlotMode } from './canvas';
import type { PlotColumn } from './provider';

type Props = {
  columns: PlotColumn[];
  view: TraceView;
  onView: (view: TraceView) => void;
  mode: PlotMode;
  onMode: (mode: PlotMode) => void;
  mayNameSpans: boolean;
  zoomed: boolean;
  onZoom: (factor: number) => void;
  onReset: () => void;
};

const modes: { mode: PlotMode; label: string }[] = [
  { mode: 'zoom', label: 'drag zooms' },
  { mode: 'pan', label: 'drag moves' },
  { mode: 'span', label: 'drag marks a span' },
];

const maxCurves = 8;

/** Choice of axes, scales, what dragging does, and zoom by button. */
export function PlotControls({ columns, view, onView, mode, onMode, mayNameSpans, zoomed, onZoom, onReset }: Props) {
  const group = useId();
  const offered = modes.filter((item) => item.mode !== 'span' || mayNameSpans);
  return (
    <div className="flex flex-wrap items-center gap-x-4 gap-y-2 text-sm">
      <label className="flex items-center gap-1">
        <span>horizontal</span>
        <select
          className="field !w-auto"
          value={view.x ?? ''}
          onChange={(event) => onView({ ...view, x: event.target.value || null, range: null })}
        >
          <option value="">row number</option>
          {columns.map(({ symbol, unit }) => (
            <option key={symbol} value={symbol}>
              {axisLabel(symbol, unit)}
            </option>
          ))}
        </select>
      </label>
      <details className="relative">
        <summary className="press !min-h-8 list-none">vertical: {view.y.join(', ') || 'none'}</summary>
        <fieldset className="absolute z-10 mt-1 max-h-64 min-w-44 overflow-auto border border-edge bg-sheet p-3">
          <legend className="sr-only">Columns on the vertical axis</legend>
          {columns.map(({ symbol, unit }) => (
            <label key={symbol} className="flex min-h-7 items-center gap-2">
              <input
                type="checkbox"
                checked={view.y.includes(symbol)}
                disabled={!view.y.includes(symbol) && view.y.length >= maxCurves}
                onChange={(event) =>
                  onView({
                    ...view,
                    y: event.target.checked ? [...view.y, symbol] : view.y.filter((other) => other !== symbol),
                  })
                }
              />
              {axisLabel(symbol, unit)}
            </label>
          ))}
        </fieldset>
      </details>
      {(['logX', 'logY'] as const).map((axis) => (
        <label key={axis} className="flex min-h-[24px] items-center gap-1">
          <input
            type="checkbox"
            checked={view[axis]}
            onChange={(event) => onView({ ...view, [axis]: event.target.checked })}
          />
          log {axis === 'logX' ? 'horizontal' : 'vertical'}
        </label>
      ))}
      <fieldset className="flex flex-wrap items-center gap-x-3">
        <legend className="sr-only">What dragging over the plot does</legend>
        {offered.map((item) => (
          <label key={item.mode} className="flex min-h-[24px] items-center gap-1">
            <input type="radio" name={group} checked={mode === item.mode} onChange={() => onMode(item.mode)} />
            {item.label}
          </label>
        ))}
      </fieldset>
      <span className="flex gap-1">
        <button type="button" className="press !min-h-8" onClick={() => onZoom(0.5)} aria-label="zoom in">
          +
        </button>
        <button type="button" className="press !min-h-8" onClick={() => onZoom(2)} aria-label="zoom out">
          −
        </button>
        <button type="button" className="press !min-h-8" onClick={onReset} disabled={!zoomed}>
          whole trace
        </button>
      </span>
    </div>
  );
}
