import { newBlockId } from './block-id';
import type { DocumentJson, NodeJson } from './json';

export type Layout = { key: string; name: string; about: string; build: () => DocumentJson };

const paragraph = (text?: string): NodeJson => ({
  type: 'paragraph',
  attrs: { id: newBlockId() },
  ...(text ? { content: [{ type: 'text', text }] } : {}),
});
const heading = (text: string): NodeJson => ({
  type: 'heading',
  attrs: { id: newBlockId(), level: 2 },
  content: [{ type: 'text', text }],
});
const cellOf = (type: 'tableHeader' | 'tableCell', text?: string): NodeJson => ({
  type,
  attrs: { colspan: 1, rowspan: 1, colwidth: null, align: null },
  content: [{ type: 'paragraph', attrs: { id: null }, ...(text ? { content: [{ type: 'text', text }] } : {}) }],
});
const table = (head: string[], firstColumn: string[]): NodeJson => ({
  type: 'table',
  attrs: { id: newBlockId() },
  content: [
    { type: 'tableRow', content: head.map((text) => cellOf('tableHeader', text)) },
    ...firstColumn.map((text) => ({
      type: 'tableRow',
      content: head.map((_, column) => (column === 0 ? cellOf('tableHeader', text) : cellOf('tableCell'))),
    })),
  ],
});
const checklist = (lines: string[]): NodeJson => ({
  type: 'taskList',
  attrs: { id: newBlockId() },
  content: lines.map((text) => ({
    type: 'taskItem',
    attrs: { checked: false },
    content: [{ type: 'paragraph', attrs: { id: null }, content: [{ type: 'text', text }] }],
  })),
});

/** The day beside the cryostat, from the aim to what comes next. */
function cooldownDay(): DocumentJson {
  return {
    type: 'doc',
    content: [
      {
        type: 'caution',
        attrs: { id: newBlockId(), acknowledgedAt: null, acknowledgedBy: null },
      },
      heading('Aim'),
      paragraph(),
      heading('State of the cryostat'),
      table(
        ['quantity', 'value', 'read at'],
        [
          'temperature of the sample stage',
          'temperature of the bath or second stage',
          'helium level',
          'pressure, insert',
          'pressure, vacuum space',
        ],
      ),
      heading('Safety checks'),
      checklist([
        'Oxygen monitor on and reading normal',
        'Relief valves and exhaust line free',
        'Eye and hand protection at the cryostat',
        'Gates and contacts grounded before connecting',
      ]),
      heading('Log'),
      paragraph(),
      heading('Measurements'),
      paragraph(),
      heading('Results'),
      paragraph(),
      heading('What next'),
      paragraph(),
    ],
  };
}

export const layouts: readonly Layout[] = [
  {
    key: 'cooldown-day',
    name: 'Cooldown day',
    about: 'Caution, aim, state of the cryostat, safety checks, log, measurements, results, what next.',
    build: cooldownDay,
  },
  { key: 'empty', name: 'Empty', about: 'A blank sheet.', build: () => ({ type: 'doc', content: [paragraph()] }) },
];

/** A document of the layout with fresh ids; the empty one for a key that is not known. */
export function documentOfLayout(key: string): DocumentJson {
  const layout = layouts.find((candidate) => candidate.key === key);
  return (layout ?? layouts[layouts.length - 1]!).build();
}

function rowOf(row: NodeJson, first: boolean): NodeJson {
  return {
    type: 'tableRow',
    content: (row.content ?? []).map((cell) => {
      const keeps = cell.type === 'tableHeader' || first;
      const text = keeps ? plainInline(cell.content?.[0]) : [];
      return {
        type: cell.type,
        attrs: { ...cell.attrs },
        content: [{ type: 'paragraph', attrs: { id: null }, ...(text.length ? { content: text } : {}) }],
      };
    }),
  };
}

/** Text and marks of a line, without values, equations and links. */
function plainInline(line: NodeJson | undefined): NodeJson[] {
  return (line?.content ?? [])
    .filter((node) => node.type === 'text')
    .map((node) => {
      const marks = (node.marks ?? []).filter((mark) => mark.type !== 'link');
      return { type: 'text', text: node.text, ...(marks.length ? { marks } : {}) };
    });
}

function structureOfBlock(block: NodeJson): NodeJson | null {
  const id = newBlockId();
  const inline = plainInline(block.content ? block : undefined);
  switch (block.type) {
    case 'heading':
      return { type: 'heading', attrs: { ...block.attrs, id }, ...(inline.length ? { content: inline } : {}) };
    case 'caution':
      return { type: 'caution', attrs: { id, acknowledgedAt: null, acknowledgedBy: null } };
    case 'horizontalRule':
      return { type: 'horizontalRule', attrs: { id } };
    case 'table': {
      const rows = (block.content ?? []).map((row, index) => rowOf(row, index === 0));
      return { type: 'table', attrs: { id }, content: rows };
    }
    case 'taskList': {
      const content = (block.content ?? []).map((item) => {
        const text = plainInline(item.content?.[0]);
        const line = { type: 'paragraph', attrs: { id: null }, ...(text.length ? { content: text } : {}) };
        return { type: 'taskItem', attrs: { checked: false }, content: [line] };
      });
      return { type: 'taskList', attrs: { id }, content };
    }
    default:
      return null;
  }
}

/**
 * What a document keeps when it is saved as a layout: headings, tables with their header cells, checklists unchecked,
 * cautions unacknowledged, rules. Text, log, traces, values and pictures are the day's and stay with it; where some
 * stood under a heading, one empty paragraph holds the place.
 */
export function structureOf(document: DocumentJson): DocumentJson {
  const content: NodeJson[] = [];
  for (const block of document.content ?? []) {
    const kept = structureOfBlock(block);
    if (kept) content.push(kept);
    else if (content[content.length - 1]?.type !== 'paragraph') content.push(paragraph());
  }
  return { type: 'doc', content: content.length ? content : [paragraph()] };
}
