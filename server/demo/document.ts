import 'server-only';
import type { TraceSettings, TraceView } from '@/lib/document/attributes';
import { newBlockId } from '@/lib/document/block-id';
import type { NodeJson } from '@/lib/document/json';
import type { TraceDto } from '@/lib/schemas/entry';

/** Writing for the demonstration: blocks of a document from plain words, with `{symbol = …}` for values and `$…$` for equations. */

const inline = (text: string): NodeJson[] =>
  text.split(/(\{[^}]+\}|\$[^$]+\$)/).flatMap((part): NodeJson[] => {
    if (part === '') return [];
    if (part.startsWith('{')) {
      return [
        {
          type: 'value',
          attrs: { id: newBlockId(), source: part.slice(1, -1), unit: null, digits: null, shown: null },
        },
      ];
    }
    if (part.startsWith('$')) return [{ type: 'equation', attrs: { tex: part.slice(1, -1) } }];
    return [{ type: 'text', text: part }];
  });

const withId = () => ({ id: newBlockId() });

export const paragraph = (text: string): NodeJson => ({ type: 'paragraph', attrs: withId(), content: inline(text) });
export const heading = (text: string): NodeJson => ({
  type: 'heading',
  attrs: { ...withId(), level: 2 },
  content: inline(text),
});
export const equationBlock = (tex: string): NodeJson => ({ type: 'equationBlock', attrs: { ...withId(), tex } });
export const logLine = (at: Date, text: string): NodeJson => ({
  type: 'logLine',
  attrs: { ...withId(), at: at.toISOString().replace(/\.\d+Z$/, '+00:00') },
  content: inline(text),
});
export const caution = (by: string, at: Date): NodeJson => ({
  type: 'caution',
  attrs: { ...withId(), acknowledgedAt: at.toISOString().replace(/\.\d+Z$/, '+00:00'), acknowledgedBy: by },
});
export const checks = (lines: string[]): NodeJson => ({
  type: 'taskList',
  attrs: withId(),
  content: lines.map((line) => ({
    type: 'taskItem',
    attrs: { checked: true },
    content: [{ type: 'paragraph', attrs: { id: null }, content: inline(line) }],
  })),
});
export const table = (rows: string[][]): NodeJson => ({
  type: 'table',
  attrs: withId(),
  content: rows.map((cells, row) => ({
    type: 'tableRow',
    content: cells.map((cell) => ({
      type: row === 0 ? 'tableHeader' : 'tableCell',
      attrs: { colspan: 1, rowspan: 1, colwidth: null, align: null },
      content: [{ type: 'paragraph', attrs: { id: null }, content: inline(cell) }],
    })),
  })),
});

export type TraceWords = {
  handle: string;
  x: string;
  y: string[];
  spans?: { name: string; axis: string; intervals: [number, number][] }[];
  settings?: Partial<TraceSettings>;
  gain?: { column: string; text: string; source: string };
};

export function traceBlock(trace: TraceDto, words: TraceWords): NodeJson {
  const blank: Omit<TraceSettings, 'columns'> = {
    scanKind: null,
    sign: 'as recorded',
    signConvention: 'positive: electrons leave through the drain',
    drive: { frequency: null, waveform: null, amplitude: null, load: null, wait: null, eject: null },
    instrument: { name: null, range: null, bandwidth: null, integrationTime: null, overload: null },
    sweepDirection: null,
  };
  const settings: TraceSettings = {
    ...blank,
    ...words.settings,
    columns: trace.columns.map(({ name, symbol, unit }) => ({
      name,
      symbol,
      unit,
      gain: words.gain?.column === symbol ? { text: words.gain.text, source: words.gain.source } : null,
      offset: null,
    })),
  };
  const view: TraceView = { x: words.x, y: words.y, logX: false, logY: false, range: null };
  return {
    type: 'trace',
    attrs: { ...withId(), traceId: trace.id, handle: words.handle, settings, spans: words.spans ?? [], view },
  };
}
