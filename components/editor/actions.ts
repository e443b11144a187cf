import type { Editor } from '@tiptap/core';
import { insertEquation, insertEquationBlock } from './equation/extension';
import { insertLogLine } from './log-line/extension';
import { insertValue } from './value/extension';

/** What the sheet around the editor does for it. */
export type EditorHost = {
  /** Opens the file dialog; the files land at the cursor. */
  choose: (kind: 'trace' | 'picture') => void;
  /** Files that were pasted or dropped; `position` is a place in the document, null for the cursor. */
  attach: (kind: 'trace' | 'picture', files: File[], position: number | null) => void;
};

export type EditorAction = {
  key: string;
  title: string;
  about: string;
  keys: string | null;
  group: 'measure' | 'text';
  /** Other words a person may look for it by. */
  also: string;
  run: (editor: Editor) => void;
};

/** Everything that can be put into an entry; toolbar, insert menu and command menu read this one list. */
export function editorActions(host: EditorHost): EditorAction[] {
  const text = (editor: Editor) => editor.chain().focus();
  return [
    {
      key: 'log',
      title: 'Log line',
      about: 'a line with the present time',
      keys: 'Ctrl+;',
      group: 'measure',
      also: 'time stamp now',
      run: (editor) => insertLogLine(editor),
    },
    {
      key: 'value',
      title: 'Value',
      about: 'symbol = expression, calculated',
      keys: "Ctrl+'",
      group: 'measure',
      also: 'calculate cell number result',
      run: (editor) => insertValue(editor),
    },
    {
      key: 'trace',
      title: 'Trace',
      about: 'attach a raw file',
      keys: null,
      group: 'measure',
      also: 'file csv hdf5 data upload attach',
      run: () => host.choose('trace'),
    },
    {
      key: 'equation',
      title: 'Equation in the line',
      about: 'TeX between two $',
      keys: '$…$',
      group: 'measure',
      also: 'math tex formula',
      run: (editor) => insertEquation(editor),
    },
    {
      key: 'equation-block',
      title: 'Displayed equation',
      about: 'TeX on a line of its own',
      keys: null,
      group: 'measure',
      also: 'math tex formula',
      run: (editor) => insertEquationBlock(editor),
    },
    {
      key: 'picture',
      title: 'Picture',
      about: 'from a file; paste works too',
      keys: null,
      group: 'measure',
      also: 'image photograph photo',
      run: () => host.choose('picture'),
    },
    {
      key: 'table',
      title: 'Table',
      about: 'three columns, three rows',
      keys: null,
      group: 'text',
      also: 'grid spreadsheet',
      run: (editor) => text(editor).insertTable({ rows: 3, cols: 3, withHeaderRow: true }).run(),
    },
    {
      key: 'checks',
      title: 'Checklist',
      about: 'lines to tick off',
      keys: 'Ctrl+Shift+9',
      group: 'text',
      also: 'task to do',
      run: (editor) => text(editor).toggleTaskList().run(),
    },
    {
      key: 'heading-1',
      title: 'Heading 1',
      about: 'of a part',
      keys: 'Ctrl+Alt+1',
      group: 'text',
      also: 'title section',
      run: (editor) => text(editor).setHeading({ level: 1 }).run(),
    },
    {
      key: 'heading-2',
      title: 'Heading 2',
      about: 'of a section',
      keys: 'Ctrl+Alt+2',
      group: 'text',
      also: 'title section',
      run: (editor) => text(editor).setHeading({ level: 2 }).run(),
    },
    {
      key: 'heading-3',
      title: 'Heading 3',
      about: 'of a paragraph',
      keys: 'Ctrl+Alt+3',
      group: 'text',
      also: 'title section',
      run: (editor) => text(editor).setHeading({ level: 3 }).run(),
    },
    {
      key: 'text',
      title: 'Text',
      about: 'an ordinary paragraph',
      keys: 'Ctrl+Alt+0',
      group: 'text',
      also: 'paragraph plain',
      run: (editor) => text(editor).setParagraph().run(),
    },
    {
      key: 'bullets',
      title: 'List',
      about: 'with bullets',
      keys: 'Ctrl+Shift+8',
      group: 'text',
      also: 'bullet unordered',
      run: (editor) => text(editor).toggleBulletList().run(),
    },
    {
      key: 'numbers',
      title: 'Numbered list',
      about: '1, 2, 3',
      keys: 'Ctrl+Shift+7',
      group: 'text',
      also: 'ordered',
      run: (editor) => text(editor).toggleOrderedList().run(),
    },
    {
      key: 'quote',
      title: 'Quotation',
      about: 'from a manual or a mail',
      keys: 'Ctrl+Shift+B',
      group: 'text',
      also: 'blockquote cite',
      run: (editor) => text(editor).toggleBlockquote().run(),
    },
    {
      key: 'code',
      title: 'Code',
      about: 'a script or an instrument’s answer',
      keys: 'Ctrl+Alt+C',
      group: 'text',
      also: 'monospace script',
      run: (editor) => text(editor).toggleCodeBlock().run(),
    },
    {
      key: 'rule',
      title: 'Rule',
      about: 'a line across the sheet',
      keys: null,
      group: 'text',
      also: 'divider horizontal',
      run: (editor) => text(editor).setHorizontalRule().run(),
    },
    {
      key: 'caution',
      title: 'Caution',
      about: 'the reminder of a cooldown day',
      keys: null,
      group: 'text',
      also: 'safety warning',
      run: (editor) => text(editor).insertContent({ type: 'caution' }).run(),
    },
  ];
}

/** The actions that every word of the query is found in, best matches (title begins so) first. */
export function findActions(actions: EditorAction[], query: string): EditorAction[] {
  const words = query.toLowerCase().split(/\s+/).filter(Boolean);
  const found = actions.filter((action) => {
    const text = `${action.title} ${action.about} ${action.also}`.toLowerCase();
    return words.every((word) => text.includes(word));
  });
  const begins = (action: EditorAction) => (words[0] && action.title.toLowerCase().startsWith(words[0]) ? 0 : 1);
  return found.sort((a, b) => begins(a) - begins(b));
}
