import type { Tick } from './axis';
import { linearTicks, logTicks } from './axis';
import { seriesColour, seriesDash } from './palette';

/** A plot as a self-contained SVG document: no script, no style sheet, no link, fonts by family name only. */

export type SvgSeries = { label: string; x: ArrayLike<number>; min: ArrayLike<number>; max: ArrayLike<number> };
export type SvgSpan = { label: string; intervals: [number, number][] };
export type SvgPlot = {
  title: string;
  /** What a reader who cannot see the plot is told. */
  description: string;
  xLabel: string;
  yLabel: string;
  xRange: [number, number];
  yRange: [number, number];
  logX: boolean;
  logY: boolean;
  series: SvgSeries[];
  spans: SvgSpan[];
  width?: number;
  height?: number;
};

export function escapeXml(text: string): string {
  return text
    .replace(/[\u0000-\u0008\u000b\u000c\u000e-\u001f]/g, '')
    .replaceAll('&', '&amp;')
    .replaceAll('<', '&lt;')
    .replaceAll('>', '&gt;')
    .replaceAll('"', '&quot;');
}

/** Maps a value to its place on an axis; NaN where a logarithmic axis cannot show it. */
export function axisPlace(
  range: [number, number],
  log: boolean,
  start: number,
  end: number,
): (value: number) => number {
  const turn = (value: number) => (log ? (value > 0 ? Math.log10(value) : NaN) : value);
  const low = turn(range[0]);
  const high = turn(range[1]);
  return (value) => start + ((turn(value) - low) / (high - low)) * (end - start);
}

/** The path of one curve, in the coordinates of the drawing: lines between samples, a vertical stroke where a bucket has extent. */
export function curvePath(series: SvgSeries, px: (x: number) => number, py: (y: number) => number): string {
  let path = '';
  let open = false;
  const round = (value: number) => Math.round(value * 100) / 100;
  for (let i = 0; i < series.x.length; i += 1) {
    const x = round(px(series.x[i] as number));
    const low = round(py(series.min[i] as number));
    const high = round(py(series.max[i] as number));
    if (!Number.isFinite(x) || !Number.isFinite(low) || !Number.isFinite(high)) {
      open = false;
      continue;
    }
    path += `${open ? 'L' : 'M'}${x} ${low}`;
    if (high !== low) path += `L${x} ${high}`;
    open = true;
  }
  return path;
}

export function plotSvg(plot: SvgPlot): string {
  const width = plot.width ?? 720;
  const height = plot.height ?? 440;
  const frame = { left: 84, right: width - 16, top: 40, bottom: height - 56 };
  const px = axisPlace(plot.xRange, plot.logX, frame.left, frame.right);
  const py = axisPlace(plot.yRange, plot.logY, frame.bottom, frame.top);
  const ticks = (range: [number, number], log: boolean, count: number): Tick[] =>
    log ? logTicks(range[0], range[1], count) : linearTicks(range[0], range[1], count);
  const out: string[] = [
    `<svg xmlns="http://www.w3.org/2000/svg" width="${width}" height="${height}" viewBox="0 0 ${width} ${height}" role="img" font-family="IBM Plex Sans, Helvetica, Arial, sans-serif" font-size="13">`,
    `<title>${escapeXml(plot.title)}</title><desc>${escapeXml(plot.description)}</desc>`,
    `<rect width="${width}" height="${height}" fill="#ffffff"/>`,
    `<clipPath id="frame"><rect x="${frame.left}" y="${frame.top}" width="${frame.right - frame.left}" height="${frame.bottom - frame.top}"/></clipPath>`,
  ];
  plot.spans.forEach((span, i) => {
    for (const [from, to] of span.intervals) {
      const left = Math.max(frame.left, Math.min(px(from), px(to)));
      const right = Math.min(frame.right, Math.max(px(from), px(to)));
      if (!(right > left)) continue;
      out.push(
        `<rect x="${left}" y="${frame.top}" width="${right - left}" height="${frame.bottom - frame.top}" fill="${seriesColour(i + 2)}" fill-opacity="0.15"/>`,
        `<text x="${(left + right) / 2}" y="${frame.top + 14}" text-anchor="middle" fill="#16232b">${escapeXml(span.label)}</text>`,
      );
    }
  });
  for (const { value, text } of ticks(plot.xRange, plot.logX, 6)) {
    const x = px(value);
    out.push(
      `<line x1="${x}" x2="${x}" y1="${frame.top}" y2="${frame.bottom}" stroke="#d3dcd8"/>`,
      `<text x="${x}" y="${frame.bottom + 18}" text-anchor="middle" fill="#16232b">${text}</text>`,
    );
  }
  for (const { value, text } of ticks(plot.yRange, plot.logY, 6)) {
    const y = py(value);
    out.push(
      `<line x1="${frame.left}" x2="${frame.right}" y1="${y}" y2="${y}" stroke="#d3dcd8"/>`,
      `<text x="${frame.left - 8}" y="${y + 4}" text-anchor="end" fill="#16232b">${text}</text>`,
    );
  }
  plot.series.forEach((series, i) => {
    const dash = seriesDash(i).join(' ');
    out.push(
      `<path clip-path="url(#frame)" d="${curvePath(series, px, py)}" fill="none" stroke="${seriesColour(i)}" stroke-width="1.3"${dash ? ` stroke-dasharray="${dash}"` : ''}/>`,
    );
    if (plot.series.length > 1) {
      const x = frame.left + 12 + i * 120;
      out.push(
        `<line x1="${x}" x2="${x + 24}" y1="${frame.top - 10}" y2="${frame.top - 10}" stroke="${seriesColour(i)}" stroke-width="2"${dash ? ` stroke-dasharray="${dash}"` : ''}/>`,
        `<text x="${x + 30}" y="${frame.top - 6}" fill="#16232b">${escapeXml(series.label)}</text>`,
      );
    }
  });
  out.push(
    `<rect x="${frame.left}" y="${frame.top}" width="${frame.right - frame.left}" height="${frame.bottom - frame.top}" fill="none" stroke="#16232b"/>`,
    `<text x="${(frame.left + frame.right) / 2}" y="${height - 14}" text-anchor="middle" fill="#16232b">${escapeXml(plot.xLabel)}</text>`,
    `<text transform="translate(20 ${(frame.top + frame.bottom) / 2}) rotate(-90)" text-anchor="middle" fill="#16232b">${escapeXml(plot.yLabel)}</text>`,
    '</svg>',
  );
  return out.join('\n');
}
