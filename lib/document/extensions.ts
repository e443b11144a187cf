import { getSchema, type Extensions } from '@tiptap/core';
import { TaskItem, TaskList } from '@tiptap/extension-list';
import { Table, TableRow } from '@tiptap/extension-table';
import type { Schema } from '@tiptap/pm/model';
import StarterKit from '@tiptap/starter-kit';
import { caution } from './nodes/caution';
import { equation, equationBlock } from './nodes/equation';
import { identity } from './nodes/identity';
import { link } from './nodes/link';
import { logLine } from './nodes/log-line';
import { picture } from './nodes/picture';
import { subscript, superscript } from './nodes/scripts';
import { sheet } from './nodes/sheet';
import { tableCell, tableHeader } from './nodes/table-cells';
import { trace } from './nodes/trace';
import { value } from './nodes/value';

/** Text, lists and tables: the part of the document that has no view of its own. */
export const textExtensions: Extensions = [
  sheet,
  StarterKit.configure({
    document: false,
    link: false,
    underline: false,
    trailingNode: false,
    heading: { levels: [1, 2, 3] },
    codeBlock: { defaultLanguage: null },
    undoRedo: { depth: 500, newGroupDelay: 500 },
  }),
  TaskList,
  TaskItem.configure({ nested: true, a11y: { checkboxLabel: (node) => node.textContent || 'empty line of the list' } }),
  Table.configure({ resizable: false }),
  TableRow,
  tableHeader,
  tableCell,
  link,
  subscript,
  superscript,
  identity,
];

/** Own nodes without views; the editor puts extensions with views in their place. */
export const ownNodes = { equation, equationBlock, logLine, caution, trace, value, picture };

/** Everything a document may hold, without React and without a DOM. */
export const documentExtensions: Extensions = [...textExtensions, ...Object.values(ownNodes)];

let schema: Schema | null = null;

/** The document's schema, built once. */
export function documentSchema(): Schema {
  schema ??= getSchema(documentExtensions);
  return schema;
}
