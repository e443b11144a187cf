'use client';

import { useEffect, useRef, useState } from 'react';
import uPlot from 'uplot';
import { axisLabel, axisUnit, linearTicks, logTicks } from '@/lib/plot/axis';
import { seriesColour, seriesDash } from '@/lib/plot/palette';
import type { PlotView } from '@/lib/plot/view';
import type { Range } from './scale';

export type DrawnSpan = { label: string; intervals: [number, number][]; colour: number };
export type Axis = { label: string; unit: string | null; range: Range; log: boolean };
export type PlotMode = 'zoom' | 'pan' | 'span';

type Props = {
  views: PlotView[];
  x: Axis;
  y: Axis;
  spans: DrawnSpan[];
  cursor: number | null;
  mode: PlotMode;
  width: number;
  height: number;
  onSelect: (range: Range) => void;
  onPan: (share: number) => void;
  onCursor: (x: number | null) => void;
  /** Gets the canvas for exporting it. */
  canvasRef: (canvas: HTMLCanvasElement | null) => void;
};

function roles() {
  const style = getComputedStyle(document.documentElement);
  const role = (name: string, otherwise: string) => style.getPropertyValue(name).trim() || otherwise;
  return { ink: role('--ink', '#16232b'), rule: role('--rule', '#d3dcd8'), sheet: role('--sheet', '#ffffff') };
}

function uplotAxis({ label, unit, range, log }: Axis, vertical: boolean): uPlot.Axis {
  const { unit: shown, factor } = axisUnit(log ? null : unit, Math.max(Math.abs(range[0]), Math.abs(range[1])));
  const inUnit = log ? unit : shown;
  const scaled = log ? 1 : factor;
  const texts = new Map<number, string>();
  const { ink, rule } = roles();
  return {
    scale: vertical ? 'y' : 'x',
    label: axisLabel(label, inUnit),
    labelFont: '13px "IBM Plex Sans", sans-serif',
    font: '12px "IBM Plex Sans", sans-serif',
    stroke: ink,
    grid: { stroke: rule, width: 1 },
    ticks: { stroke: rule, width: 1 },
    size: vertical ? 72 : 44,
    labelSize: 22,
    splits: (plot, _axis, low, high) => {
      const length = (vertical ? plot.bbox.height : plot.bbox.width) / devicePixelRatio;
      const count = Math.max(vertical ? 2 : 3, Math.floor(length / (vertical ? 45 : 80)));
      texts.clear();
      return (log ? logTicks(low, high, count) : linearTicks(low * scaled, high * scaled, count)).map(
        ({ value, text }) => {
          texts.set(value / scaled, text);
          return value / scaled;
        },
      );
    },
    values: (_plot, splits) => splits.map((value) => texts.get(value) ?? ''),
  };
}

/** Lines between samples, and a vertical stroke where a bucket has extent; drawn from the view, not from uPlot's own data. */
function curve(view: PlotView): uPlot.Series.PathBuilder {
  return (plot) => {
    const path = new Path2D();
    let open = false;
    for (let i = 0; i < view.x.length; i += 1) {
      const x = plot.valToPos(view.x[i], 'x', true);
      const low = plot.valToPos(view.min[i], 'y', true);
      const high = plot.valToPos(view.max[i], 'y', true);
      if (!Number.isFinite(x) || !Number.isFinite(low) || !Number.isFinite(high)) {
        open = false;
        continue;
      }
      if (open) path.lineTo(x, low);
      else path.moveTo(x, low);
      if (high !== low) {
        path.lineTo(x, high);
      } else if (!open) {
        // A sample between two missing ones has no line; a dot shows it.
        path.rect(x - 1, low - 1, 2, 2);
        path.moveTo(x, low);
      }
      open = true;
    }
    return { stroke: path, flags: 2 };
  };
}

function drawSpans(plot: uPlot, spans: DrawnSpan[]): void {
  const { ctx, bbox } = plot;
  ctx.save();
  ctx.beginPath();
  ctx.rect(bbox.left, bbox.top, bbox.width, bbox.height);
  ctx.clip();
  const { ink } = roles();
  for (const { label, intervals, colour } of spans) {
    for (const [from, to] of intervals) {
      const left = plot.valToPos(Math.min(from, to), 'x', true);
      const right = plot.valToPos(Math.max(from, to), 'x', true);
      if (!Number.isFinite(left) || !Number.isFinite(right)) continue;
      ctx.fillStyle = seriesColour(colour);
      ctx.globalAlpha = 0.18;
      ctx.fillRect(left, bbox.top, Math.max(1, right - left), bbox.height);
      ctx.globalAlpha = 1;
      ctx.fillRect(left, bbox.top, 1, bbox.height);
      ctx.fillRect(right, bbox.top, 1, bbox.height);
      ctx.fillStyle = ink;
      ctx.font = `${12 * devicePixelRatio}px "IBM Plex Sans", sans-serif`;
      ctx.textAlign = 'center';
      ctx.fillText(
        label,
        (Math.max(left, bbox.left) + Math.min(right, bbox.left + bbox.width)) / 2,
        bbox.top + 14 * devicePixelRatio,
      );
    }
  }
  ctx.restore();
}

function drawCursor(plot: uPlot, x: number | null): void {
  if (x === null) return;
  const { ctx, bbox } = plot;
  const at = plot.valToPos(x, 'x', true);
  if (!(at >= bbox.left && at <= bbox.left + bbox.width)) return;
  ctx.save();
  ctx.strokeStyle = roles().ink;
  ctx.setLineDash([3, 3]);
  ctx.beginPath();
  ctx.moveTo(at, bbox.top);
  ctx.lineTo(at, bbox.top + bbox.height);
  ctx.stroke();
  ctx.restore();
}

/** The drawn plot on a canvas. Everything it says in pixels, its surroundings say in words. */
export function PlotCanvas(props: Props) {
  const { views, x, y, spans, cursor, mode, width, height } = props;
  const [xFrom, xTo] = x.range;
  const [yFrom, yTo] = y.range;
  const host = useRef<HTMLDivElement>(null);
  const drawn = useRef<uPlot | null>(null);
  const latest = useRef(props);
  useEffect(() => {
    latest.current = props;
  });
  const [theme, setTheme] = useState(0);

  useEffect(() => {
    const again = () => setTheme((n) => n + 1);
    const observer = new MutationObserver(again);
    observer.observe(document.documentElement, { attributes: true, attributeFilter: ['data-theme'] });
    const media = window.matchMedia('(prefers-color-scheme: dark)');
    media.addEventListener('change', again);
    return () => {
      observer.disconnect();
      media.removeEventListener('change', again);
    };
  }, []);

  useEffect(() => {
    if (!host.current) return;
    const plot = new uPlot(
      {
        width,
        height,
        legend: { show: false },
        scales: {
          x: { time: false, distr: x.log ? 3 : 1, range: () => x.range },
          y: { distr: y.log ? 3 : 1, range: () => y.range },
        },
        cursor: { points: { show: false }, x: false, y: false, drag: { x: mode !== 'pan', y: false, setScale: false } },
        axes: [uplotAxis(x, false), uplotAxis(y, true)],
        series: [
          {},
          ...views.map((view, i) => ({
            scale: 'y',
            stroke: seriesColour(i),
            width: 1.3,
            dash: [...seriesDash(i)],
            points: { show: false },
            paths: curve(view),
          })),
        ],
        hooks: {
          drawClear: [(self) => drawSpans(self, latest.current.spans)],
          draw: [(self) => drawCursor(self, latest.current.cursor)],
          setSelect: [
            (self) => {
              const { left, width: wide } = self.select;
              if (wide < 3) return;
              const range: Range = [self.posToVal(left, 'x'), self.posToVal(left + wide, 'x')];
              self.setSelect({ left: 0, top: 0, width: 0, height: 0 }, false);
              latest.current.onSelect(range);
            },
          ],
          setCursor: [
            (self) => {
              const { left } = self.cursor;
              if (left === undefined || left < 0) return;
              latest.current.onCursor(self.posToVal(left, 'x'));
            },
          ],
        },
      },
      // uPlot needs data to draw anything; the curves come from the views.
      [[...x.range], ...views.map(() => [...y.range])] as uPlot.AlignedData,
      host.current,
    );
    drawn.current = plot;
    latest.current.canvasRef(plot.ctx.canvas);
    let held: number | null = null;
    const down = (event: PointerEvent) => {
      if (latest.current.mode !== 'pan') return;
      held = event.clientX;
      plot.over.setPointerCapture(event.pointerId);
    };
    const move = (event: PointerEvent) => {
      if (held === null) return;
      latest.current.onPan((held - event.clientX) / plot.over.clientWidth);
      held = event.clientX;
    };
    const up = () => {
      held = null;
    };
    plot.over.addEventListener('pointerdown', down);
    plot.over.addEventListener('pointermove', move);
    plot.over.addEventListener('pointerup', up);
    plot.over.addEventListener('pointercancel', up);
    plot.over.style.cursor = mode === 'pan' ? 'grab' : 'crosshair';
    return () => {
      latest.current.canvasRef(null);
      drawn.current = null;
      plot.destroy();
    };
    // The parts of an axis are compared one by one: the objects are made anew with every rendering.
    // eslint-disable-next-line react-hooks/exhaustive-deps -- see above
  }, [views, width, height, mode, theme, x.label, x.unit, x.log, xFrom, xTo, y.label, y.unit, y.log, yFrom, yTo]);

  useEffect(() => {
    drawn.current?.redraw(false, false);
  }, [spans, cursor]);

  return <div ref={host} aria-hidden="true" style={{ touchAction: mode === 'pan' ? 'none' : undefined }} />;
}
