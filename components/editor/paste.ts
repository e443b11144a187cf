import { Extension } from '@tiptap/core';
import type { Node as ProseMirrorNode, Schema } from '@tiptap/pm/model';
import { Plugin, PluginKey } from '@tiptap/pm/state';
import { allowedLink } from '@/lib/document/nodes/link';
import type { EditorHost } from './actions';

const widest = 64;
const longest = 2000;

/** Rows of a spreadsheet's plain text; null where the text is no table (no tab, or rows of one cell). */
export function tableOfText(text: string): string[][] | null {
  if (!text.includes('\t')) return null;
  const lines = text.replace(/\r\n?/g, '\n').replace(/\n+$/, '').split('\n');
  const rows = lines.map((line) => line.split('\t').map((cell) => cell.trim()));
  const width = Math.max(...rows.map((row) => row.length));
  if (width < 2 || width > widest || rows.length > longest) return null;
  // Prose with a stray tab is no table: most lines of one have the same number of cells.
  if (rows.filter((row) => row.length === width).length < rows.length / 2) return null;
  return rows.map((row) => [...row, ...new Array<string>(width - row.length).fill('')]);
}

/** A table node; the first row is a head where it has no number in it and the others have some. */
export function tableNode(schema: Schema, rows: string[][]): ProseMirrorNode {
  const numeric = (cell: string) => /^[-+−]?[\d.,]*\d/.test(cell);
  const headed = rows.length > 1 && !rows[0]!.some(numeric) && rows.slice(1).some((row) => row.some(numeric));
  const { table, tableRow, tableCell, tableHeader, paragraph } = schema.nodes;
  return table!.create(
    null,
    rows.map((row, index) =>
      tableRow!.create(
        null,
        row.map((cell) => {
          const type = headed && index === 0 ? tableHeader! : tableCell!;
          return type.create(null, paragraph!.create(null, cell === '' ? null : schema.text(cell)));
        }),
      ),
    ),
  );
}

const isPicture = (file: File) => /^image\/(png|jpeg|gif|webp)$/.test(file.type);

/** Files of a paste or drop: pictures become pictures, everything else is offered as a trace. */
function attachAll(host: EditorHost, list: FileList | null | undefined, position: number | null): boolean {
  const files = Array.from(list ?? []);
  if (files.length === 0) return false;
  const pictures = files.filter(isPicture);
  const traces = files.filter((file) => !isPicture(file));
  if (pictures.length > 0) host.attach('picture', pictures, position);
  if (traces.length > 0) host.attach('trace', traces, position);
  return true;
}

/** Paste and drop: cells of a spreadsheet as a table, images as pictures, files as traces, an address over text as a link. */
export const paste = Extension.create<{ host: EditorHost }>({
  name: 'sheetPaste',
  priority: 1100,
  addProseMirrorPlugins() {
    const { host } = this.options;
    return [
      new Plugin({
        key: new PluginKey('paste'),
        props: {
          transformPastedText: (text) => text.replaceAll('\u0000', ''),
          handlePaste: (view, event) => {
            const data = event.clipboardData;
            if (!data) return false;
            const html = data.getData('text/html');
            const text = data.getData('text/plain').replaceAll('\u0000', '');
            // A spreadsheet sends a picture of its cells along; text wins where there is some.
            if (html === '' && text === '' && attachAll(host, data.files, null)) return true;
            const { selection, schema, tr } = view.state;
            if (selection.$from.parent.type.spec.code) return false;
            const href = allowedLink(text.trim());
            if (href && !selection.empty && selection.$from.sameParent(selection.$to)) {
              view.dispatch(tr.addMark(selection.from, selection.to, schema.marks.link!.create({ href })));
              return true;
            }
            const rows = /<table[\s>]/i.test(html) ? null : tableOfText(text);
            const inTable = selection.$from.node(1)?.type.name === 'table';
            if (!rows || inTable) return false;
            view.dispatch(tr.replaceSelectionWith(tableNode(schema, rows)).scrollIntoView());
            return true;
          },
          handleDrop: (view, event, _slice, moved) => {
            if (moved) return false;
            const place = view.posAtCoords({ left: event.clientX, top: event.clientY });
            return attachAll(host, event.dataTransfer?.files, place?.pos ?? null);
          },
        },
      }),
    ];
  },
});
