/** The keys, as the `?` list shows them. Ctrl is ⌘ on a Mac. None of them is taken by a browser on an editable page. */
export const keyTable = [
  {
    group: 'Everywhere',
    keys: [
      ['Ctrl+K', 'find or do'],
      ['?', 'this list (not while typing)'],
    ],
  },
  {
    group: 'Writing',
    keys: [
      ['Ctrl+;', 'log line with the present time'],
      ["Ctrl+'", 'value'],
      ['Enter on a value or equation', 'open it'],
      ['/', 'insert menu, at the start of a line or after a space'],
      ['$…$', 'equation in the line'],
      ['Ctrl+B, Ctrl+I', 'bold, italic'],
      ['Ctrl+, and Ctrl+.', 'subscript, superscript'],
      ['Ctrl+E', 'code in the line'],
      ['Ctrl+Alt+1 to 3, 0', 'headings, text'],
      ['Ctrl+Shift+7, 8, 9', 'numbered list, list, checklist'],
      ['Tab, Shift+Tab', 'next or previous cell; deeper or shallower in a list'],
      ['Ctrl+Z, Ctrl+Shift+Z', 'undo, redo'],
      ['Ctrl+S', 'cut a version now'],
      ['Escape, then Tab', 'leave the text'],
    ],
  },
] as const;
