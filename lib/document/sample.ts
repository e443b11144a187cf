import type { DocumentJson, NodeJson } from './json';

/** A small document with every node and mark, for tests. Invented data. */
export function sampleTrace(): NodeJson {
  return {
    type: 'trace',
    attrs: {
      id: 'trace_one_id',
      traceId: '0f8fad5b-d9cb-469f-a165-70867728950e',
      handle: 't1',
      settings: {
        columns: [
          { name: 't', symbol: 't', unit: 's', gain: null, offset: null },
          { name: 'I', symbol: 'I', unit: 'fA', gain: { text: '1e9 V/A ± 50 ppm', source: 'CAL-0181' }, offset: null },
        ],
        scanKind: 'on-off',
        sign: 'as recorded',
        signConvention: 'positive into the drain',
        drive: { frequency: '200 kHz', waveform: null, amplitude: null, load: null, wait: null, eject: null },
        instrument: { name: null, range: null, bandwidth: null, integrationTime: null, overload: null },
        sweepDirection: null,
      },
      spans: [{ name: 'on', axis: 't', intervals: [[16, 44]] }],
      view: { x: 't', y: ['I'], logX: false, logY: false, range: null },
    },
  };
}

const text = (words: string, ...marks: NodeJson['marks'] & object): NodeJson => ({
  type: 'text',
  ...(marks.length ? { marks } : {}),
  text: words,
});
const line = (...content: NodeJson[]): NodeJson => ({
  type: 'paragraph',
  attrs: { id: null },
  ...(content.length ? { content } : {}),
});
const cell = (type: string, words: string): NodeJson => ({
  type,
  attrs: { colspan: 1, rowspan: 1, colwidth: null, align: null },
  content: [line(...(words ? [text(words)] : []))],
});

export function sampleDocument(): DocumentJson {
  return {
    type: 'doc',
    content: [
      {
        type: 'caution',
        attrs: { id: 'caution_1', acknowledgedAt: '2026-11-19T09:02:00+01:00', acknowledgedBy: 'Tomas Reinholt' },
      },
      {
        type: 'paragraph',
        attrs: { id: 'bath_line' },
        content: [
          text('Bath at 4.21 K, level 61 %. Gain from '),
          text('CAL-0181', { type: 'code' }),
          text(', see '),
          text('leaf 36', { type: 'link', attrs: { href: '/entries/0f8fad5b-d9cb-469f-a165-70867728950e' } }),
          text(' bold', { type: 'bold' }),
          text(' slanted', { type: 'italic' }),
          text(' struck', { type: 'strike' }),
          text(' low', { type: 'subscript' }),
          text(' high', { type: 'superscript' }),
          { type: 'hardBreak' },
          { type: 'equation', attrs: { tex: '\\tau' } },
        ],
      },
      { type: 'heading', attrs: { id: 'heading_1', level: 2 }, content: [text('One working point')] },
      {
        type: 'paragraph',
        attrs: { id: 'values_1' },
        content: [
          text('Drive at '),
          {
            type: 'value',
            attrs: { id: 'value_f_01', source: 'f = 200 kHz exactly', unit: null, digits: null, shown: '200\u2009kHz' },
          },
          text('.'),
        ],
      },
      { type: 'equationBlock', attrs: { id: 'equation_1', tex: 'I = n e f' } },
      sampleTrace(),
      { type: 'logLine', attrs: { id: 'log_line_1', at: '2026-11-19T09:14:05+01:00' }, content: [text('drive on')] },
      {
        type: 'taskList',
        attrs: { id: 'checks_1' },
        content: [{ type: 'taskItem', attrs: { checked: true }, content: [line(text('Relief valves free'))] }],
      },
      {
        type: 'table',
        attrs: { id: 'table_1' },
        content: [
          { type: 'tableRow', content: [cell('tableHeader', 'quantity'), cell('tableHeader', 'value')] },
          { type: 'tableRow', content: [cell('tableCell', 'level'), cell('tableCell', '61 %')] },
        ],
      },
      { type: 'bulletList', attrs: { id: 'bullets_1' }, content: [{ type: 'listItem', content: [line(text('one'))] }] },
      {
        type: 'orderedList',
        attrs: { id: 'ordered_1', start: 1, type: null },
        content: [{ type: 'listItem', content: [line(text('first'))] }],
      },
      { type: 'blockquote', attrs: { id: 'quote_1' }, content: [line(text('as the manual says'))] },
      { type: 'codeBlock', attrs: { id: 'code_1', language: null }, content: [text('sweep(0, 1)')] },
      { type: 'horizontalRule', attrs: { id: 'rule_1' } },
      {
        type: 'picture',
        attrs: {
          id: 'picture_1',
          pictureId: '7c9e6679-7425-40de-944b-e07fc1f90ae7',
          alt: 'bonded chip',
          caption: 'GA1-B3 in its carrier',
        },
      },
    ],
  };
}
