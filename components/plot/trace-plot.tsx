'use client';

import { lazy, Suspense, useCallback, useEffect, useId, useMemo, useRef, useState } from 'react';
import { ErrorSentence } from '@/components/ui/sentence';
import { useFetched } from '@/components/ui/use-fetched';
import type { Span, TraceView } from '@/lib/document/attributes';
import { axisLabel, sampleText } from '@/lib/plot/axis';
import { seriesColour } from '@/lib/plot/palette';
import type { PlotMode } from './canvas';
import { PlotControls } from './plot-controls';
import type { PlotProvider } from './provider';
import { nearestPoint, panRange, type Range, xExtent, yExtent, zoomRange } from './scale';
import { SpanEditor } from './span-editor';
import { usePlotKeys } from './use-plot-keys';
import { useViews } from './use-views';

const loadTable = () => import('./sample-table').then((module) => module.SampleTable);

// The drawing library is fetched when a plot is first shown.
const PlotCanvas = lazy(async () => ({ default: (await import('./canvas')).PlotCanvas }));

type Props = {
  /** What a screen reader calls the plot: handle and file name. */
  title: string;
  fileName: string;
  provider: PlotProvider;
  view: TraceView;
  onView: (view: TraceView) => void;
  spans: Span[];
  /** Left out where spans are only shown. */
  onSpans?: (spans: Span[]) => void;
  height?: number;
  /** Shows the tools at once; in a text they are folded, so that the plot and not its switches is what one reads. */
  toolsOpen?: boolean;
};

/** The first sensible view of a trace: the first column against the others' first. */
export function firstView(columns: { symbol: string }[]): TraceView {
  const [first, second] = columns;
  const y = second ?? first;
  return { x: second ? first.symbol : null, y: y ? [y.symbol] : [], logX: false, logY: false, range: null };
}

/** A plot of columns against one another: zoom, move, read off, name spans, save; all of it by keyboard, all of it in words too. */
export function TracePlot({
  title,
  fileName,
  provider,
  view,
  onView,
  spans,
  onSpans,
  height = 320,
  toolsOpen = false,
}: Props) {
  const id = useId();
  const frame = useRef<HTMLDivElement>(null);
  const canvas = useRef<HTMLCanvasElement | null>(null);
  const [width, setWidth] = useState(640);
  const [mode, setMode] = useState<PlotMode>('zoom');
  const [cursor, setCursor] = useState<number | null>(null);
  const [proposed, setProposed] = useState<Range | null>(null);
  const [table, setTable] = useState(false);
  const { part: SampleTable, problem: tableProblem } = useFetched(table, loadTable);
  const [saveProblem, setSaveProblem] = useState<string | null>(null);

  useEffect(() => {
    const element = frame.current;
    if (!element || typeof ResizeObserver === 'undefined') return;
    const observer = new ResizeObserver(([entry]) => setWidth(Math.max(240, Math.floor(entry.contentRect.width))));
    observer.observe(element);
    return () => observer.disconnect();
  }, []);

  const known = useMemo(() => new Map(provider.columns.map((column) => [column.symbol, column])), [provider]);
  const shownX = view.x !== null && known.has(view.x) ? view.x : null;
  const shownY = useMemo(() => view.y.filter((symbol) => known.has(symbol)), [view.y, known]);
  const data = useViews(provider, shownX, shownY, view.range, width);
  const xRange = useMemo<Range | null>(
    () => (view.range && (!view.logX || view.range[0] > 0) ? view.range : xExtent(data.views, view.logX)),
    [view.range, view.logX, data.views],
  );
  const yRange = useMemo(
    () => (xRange ? yExtent(data.views, xRange, view.logY) : null),
    [data.views, xRange, view.logY],
  );

  const unitOf = (symbol: string | null) => (symbol === null ? '1' : (known.get(symbol)?.unit ?? null));
  const yUnits = new Set(data.y.map(unitOf));
  const x = { label: data.x ?? 'row number', unit: unitOf(data.x), log: view.logX };
  const yUnit = yUnits.size === 1 ? ([...yUnits][0] as string | null) : '1';
  const y = {
    label: data.y.map((symbol) => (yUnits.size > 1 ? axisLabel(symbol, unitOf(symbol)) : symbol)).join(', '),
    unit: yUnit,
    log: view.logY,
  };
  const drawnSpans = useMemo(
    () =>
      spans
        .map((span, i) => ({ ...span, colour: i + 2 }))
        .filter(({ axis }) => axis === data.x)
        .map(({ name, intervals, colour }) => ({ label: name, intervals, colour })),
    [spans, data.x],
  );

  const setRange = useCallback((range: Range | null) => onView({ ...view, range }), [onView, view]);
  const zoom = (factor: number) => {
    if (!xRange) return;
    const centre =
      cursor !== null && cursor > xRange[0] && cursor < xRange[1]
        ? cursor
        : view.logX
          ? Math.sqrt(xRange[0] * xRange[1])
          : (xRange[0] + xRange[1]) / 2;
    setRange(zoomRange(xRange, centre, factor, view.logX));
  };
  const pan = (share: number) => xRange && setRange(panRange(xRange, share, view.logX));
  const select = (range: Range) => (mode === 'span' ? setProposed(range) : setRange(range));
  const onKeyDown = usePlotKeys({
    view: data.views[0],
    range: xRange,
    cursor,
    onCursor: setCursor,
    onZoom: zoom,
    onPan: pan,
    onReset: () => setRange(null),
    onSpan: onSpans && data.x !== null ? setProposed : null,
  });

  const readout = useMemo(() => readAt(data, cursor, unitOf), [data, cursor, known]); // eslint-disable-line react-hooks/exhaustive-deps -- unitOf follows `known`
  const svg = () =>
    xRange &&
    yRange && {
      title,
      description: describe(data.y, data.x, provider.rows),
      xLabel: axisLabel(x.label, x.unit),
      yLabel: axisLabel(y.label, y.unit),
      xRange,
      yRange,
      logX: view.logX,
      logY: view.logY,
      series: data.views.map(({ x: xs, min, max }, i) => ({ label: data.y[i] ?? '', x: xs, min, max })),
      spans: drawnSpans,
    };
  const saved = (action: (files: typeof import('./exports')) => Promise<void> | void) => async () => {
    try {
      setSaveProblem(null);
      await action(await import('./exports'));
    } catch (error) {
      setSaveProblem(error instanceof Error ? error.message : String(error));
    }
  };
  const step = data.views[0]?.kind === 'sampled' ? data.views[0].step : 1;

  return (
    <figure className="plot my-2" aria-labelledby={`${id}-title`}>
      <figcaption id={`${id}-title`} className="sr-only">
        {title}: {describe(data.y, data.x, provider.rows)}
      </figcaption>
      <Legend symbols={data.y} unitOf={unitOf} />
      <div
        ref={frame}
        tabIndex={0}
        role="group"
        aria-roledescription="plot"
        aria-label={`${title}, plot. Left and right move the cursor, plus and minus zoom, comma and full stop move the range, 0 shows the whole trace${onSpans ? ', s begins and ends a span' : ''}.`}
        aria-busy={data.loading}
        onKeyDown={onKeyDown}
        style={{ minHeight: height }}
      >
        {xRange && yRange ? (
          <Suspense fallback={<p className="p-4 text-quiet">The plot is being drawn.</p>}>
            <PlotCanvas
              views={data.views}
              x={{ ...x, range: xRange }}
              y={{ ...y, range: yRange }}
              spans={drawnSpans}
              cursor={cursor}
              mode={mode}
              width={width}
              height={height}
              onSelect={select}
              onPan={pan}
              onCursor={setCursor}
              canvasRef={(element) => {
                canvas.current = element;
              }}
            />
          </Suspense>
        ) : (
          <p className="p-4 text-quiet">{data.loading ? 'The samples are being fetched.' : nothing(shownY, view)}</p>
        )}
      </div>
      <p aria-live="polite" className="figures min-h-[24px] text-sm">
        {readout}
      </p>
      {step > 1 ? (
        <p className="text-sm text-quiet">
          The horizontal axis goes to and fro: one row of {step} is drawn. Zoom in to see every row.
        </p>
      ) : null}
      <ErrorSentence>{data.problem ?? saveProblem ?? tableProblem}</ErrorSentence>
      <details className="plot-tools" open={toolsOpen || undefined}>
        <summary className="min-h-[24px] cursor-pointer text-sm text-action">Plot tools</summary>
        <div className="my-2 space-y-2">
          <PlotControls
            columns={provider.columns}
            view={view}
            onView={onView}
            mode={mode}
            onMode={setMode}
            mayNameSpans={onSpans !== undefined && shownX !== null}
            zoomed={view.range !== null}
            onZoom={zoom}
            onReset={() => setRange(null)}
          />
          <div className="flex flex-wrap gap-2 text-sm">
            <button type="button" className="press !min-h-8" aria-expanded={table} onClick={() => setTable(!table)}>
              data table
            </button>
            <button
              type="button"
              className="press !min-h-8"
              disabled={!yRange}
              onClick={saved(({ saveSvg }) => {
                const plot = svg();
                if (plot) saveSvg(plot, fileName);
              })}
            >
              SVG
            </button>
            <button
              type="button"
              className="press !min-h-8"
              disabled={!yRange}
              onClick={saved(({ savePng }) =>
                canvas.current
                  ? savePng(
                      canvas.current,
                      getComputedStyle(document.documentElement).getPropertyValue('--sheet') || '#ffffff',
                      fileName,
                    )
                  : undefined,
              )}
            >
              PNG
            </button>
            <button
              type="button"
              className="press !min-h-8"
              onClick={saved(({ saveCsv }) => saveCsv(provider, data.x, data.y, fileName))}
            >
              CSV
            </button>
          </div>
        </div>
      </details>
      {table && SampleTable ? <SampleTable provider={provider} caption={`Samples of ${title}`} /> : null}
      {onSpans && shownX !== null ? (
        <SpanEditor
          spans={spans}
          axis={shownX}
          unit={unitOf(shownX)}
          proposed={proposed}
          onSpans={onSpans}
          onDone={() => setProposed(null)}
        />
      ) : null}
    </figure>
  );
}

function Legend({ symbols, unitOf }: { symbols: string[]; unitOf: (symbol: string) => string | null }) {
  if (symbols.length < 2) return null;
  return (
    <ul className="flex flex-wrap gap-x-4 text-sm">
      {symbols.map((symbol, i) => (
        <li key={symbol} className="flex items-center gap-1">
          <span aria-hidden="true" className="inline-block h-0.5 w-6" style={{ background: seriesColour(i) }} />
          {axisLabel(symbol, unitOf(symbol))}
        </li>
      ))}
    </ul>
  );
}

function describe(y: string[], x: string | null, rows: number): string {
  return `${y.join(', ') || 'no column'} against ${x ?? 'the row number'}, ${rows} rows`;
}

function nothing(y: string[], view: TraceView): string {
  if (y.length === 0) return 'Choose a column for the vertical axis.';
  return view.logX || view.logY
    ? 'No sample here is positive, so a logarithmic axis shows nothing.'
    : 'There is no sample in this range.';
}

function readAt(
  data: { views: ReturnType<typeof useViews>['views']; x: string | null; y: string[] },
  cursor: number | null,
  unitOf: (symbol: string | null) => string | null,
): string {
  if (cursor === null) return '';
  const at = nearestPoint(data.views[0], cursor);
  if (at < 0) return '';
  const quantity = (symbol: string, unit: string | null, text: string) =>
    `${symbol} = ${text}${unit && unit !== '1' ? `\u2009${unit}` : ''}`;
  const first = quantity(data.x ?? 'row', data.x === null ? '1' : unitOf(data.x), sampleText(data.views[0].x[at]));
  const others = data.views.map((view, i) => {
    const j = i === 0 ? at : nearestPoint(view, data.views[0].x[at]);
    const low = view.min[j];
    const high = view.max[j];
    const text = low === high || Number.isNaN(low) ? sampleText(low) : `${sampleText(low)} to ${sampleText(high)}`;
    return quantity(data.y[i] ?? '', unitOf(data.y[i] ?? null), text);
  });
  return [first, ...others].join(', ');
}
