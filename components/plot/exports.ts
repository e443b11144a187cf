import { axisLabel } from '@/lib/plot/axis';
import { plotSvg, type SvgPlot } from '@/lib/plot/svg';
import { csvOfColumns } from '@/lib/trace-format/csv-writer';
import type { PlotProvider } from './provider';

/** Saves a file from the page. */
function save(blob: Blob, name: string): void {
  const link = document.createElement('a');
  link.href = URL.createObjectURL(blob);
  link.download = name;
  link.click();
  URL.revokeObjectURL(link.href);
}

const stem = (fileName: string) => fileName.replace(/\.[^.]{1,8}$/, '') || 'plot';

export function saveSvg(plot: SvgPlot, fileName: string): void {
  save(new Blob([plotSvg(plot)], { type: 'image/svg+xml' }), `${stem(fileName)}.svg`);
}

/** @throws Error with a sentence where the browser does not give the picture. */
export async function savePng(canvas: HTMLCanvasElement, ground: string, fileName: string): Promise<void> {
  const copy = document.createElement('canvas');
  copy.width = canvas.width;
  copy.height = canvas.height;
  const context = copy.getContext('2d');
  if (!context) throw new Error('The browser gave no drawing surface, so no picture was saved. Use SVG.');
  context.fillStyle = ground;
  context.fillRect(0, 0, copy.width, copy.height);
  context.drawImage(canvas, 0, 0);
  const blob = await new Promise<Blob | null>((resolve) => copy.toBlob(resolve, 'image/png'));
  if (!blob) throw new Error('The browser gave no picture, so nothing was saved. Use SVG.');
  save(blob, `${stem(fileName)}.png`);
}

/** Every row of the shown columns, not only what the plot shows of them. */
export async function saveCsv(provider: PlotProvider, x: string | null, y: string[], fileName: string): Promise<void> {
  const symbols = [...(x === null ? [] : [x]), ...y.filter((symbol) => symbol !== x)];
  const columns = await Promise.all(symbols.map((symbol) => provider.column(symbol)));
  const headers = symbols.map((symbol) =>
    axisLabel(symbol, provider.columns.find((column) => column.symbol === symbol)?.unit ?? null),
  );
  save(new Blob([...csvOfColumns(headers, columns)], { type: 'text/csv' }), `${stem(fileName)}-samples.csv`);
}
