import type { Editor } from '@tiptap/core';
import { cleanup, render, screen, waitFor, within } from '@testing-library/react';
import userEvent from '@testing-library/user-event';
import { afterEach, beforeAll, describe, expect, it, vi } from 'vitest';
import { checkDocument } from '@/lib/document/check';
import type { DocumentJson, NodeJson } from '@/lib/document/json';
import { sampleDocument, sampleTrace } from '@/lib/document/sample';
import type { TraceDto } from '@/lib/schemas/entry';
import { readingExtensions, writingExtensions } from './editor-extensions';
import { insertLogLine } from './log-line/extension';
import { tableNode, tableOfText } from './paste';
import { TestSheet, testStore } from './test-sheet';
import { insertValue } from './value/extension';

beforeAll(() => {
  // jsdom does not lay out; ProseMirror asks where text stands only to scroll.
  Range.prototype.getClientRects = () => [] as unknown as DOMRectList;
  Range.prototype.getBoundingClientRect = () => new DOMRect();
  document.elementFromPoint = () => null;
});
afterEach(cleanup);

const host = { choose: vi.fn(), attach: vi.fn() };
const paragraph = (id: string, ...content: NodeJson[]): NodeJson => ({ type: 'paragraph', attrs: { id }, content });
const text = (words: string): NodeJson => ({ type: 'text', text: words });
const cell = (id: string, source: string): NodeJson => ({
  type: 'value',
  attrs: { id, source, unit: null, digits: null, shown: null },
});
const docOf = (...content: NodeJson[]): DocumentJson => ({ type: 'doc', content });

async function sheet(doc: DocumentJson, mode: 'write' | 'read' = 'write', traces: TraceDto[] = []) {
  const store = testStore();
  const seen: { editor?: Editor; changed: string[][]; doc?: DocumentJson } = { changed: [] };
  const extensions = mode === 'write' ? writingExtensions(host) : readingExtensions;
  render(
    <TestSheet
      doc={doc}
      extensions={extensions}
      store={store}
      mode={mode}
      traces={traces}
      onEditor={(editor) => (seen.editor = editor)}
      onChange={(next, changed) => {
        seen.doc = next;
        seen.changed.push(changed);
      }}
    />,
  );
  await waitFor(() => expect(seen.editor).toBeDefined());
  const json = () => seen.editor!.getJSON() as DocumentJson;
  const press = (key: string, more: KeyboardEventInit = {}) => {
    const event = new KeyboardEvent('keydown', { key, bubbles: true, cancelable: true, ...more });
    seen.editor!.view.dom.dispatchEvent(event);
    return event.defaultPrevented;
  };
  return { editor: seen.editor!, store, seen, json, press };
}

describe('every node, JSON → view → JSON', () => {
  it.each(['write', 'read'] as const)('%s mode gives the sample back unchanged', async (mode) => {
    const sample = sampleDocument();
    const { json } = await sheet(sample, mode);
    await screen
      .findByText('GA1-B3 in its carrier', { exact: false })
      .catch(() => screen.findByDisplayValue('GA1-B3 in its carrier'));
    expect(json()).toEqual(sample);
  });

  it('reading changes nothing, whatever is clicked', async () => {
    const { json } = await sheet(sampleDocument(), 'read');
    const user = userEvent.setup();
    for (const button of screen.getAllByRole('button')) await user.click(button);
    expect(json()).toEqual(sampleDocument());
  });
});

describe('72 names as HTML', () => {
  it('file names, column names and a person’s name are text', async () => {
    const evil = '<img src=x onerror="window.hit=1">';
    const node = sampleTrace();
    const file: TraceDto = {
      id: String(node.attrs!.traceId),
      entryId: 'e1',
      fileName: `${evil}.csv`,
      mediaType: 'text/csv',
      bytes: 10,
      sha256: 'b71e04dd'.repeat(8),
      state: 'unreadable',
      problem: `The header ${evil} has no unit.`,
      rows: 3,
      columns: [],
      comments: [],
      uploadedBy: { id: 'p', name: evil, initials: 'X' },
      receivedAt: '2026-11-19T09:36:00Z',
    };
    const caution = {
      type: 'caution',
      attrs: { id: 'caution_1', acknowledgedAt: '2026-11-19T09:02:00+01:00', acknowledgedBy: evil },
    };
    const { editor } = await sheet(docOf(caution, node), 'write', [file]);
    await waitFor(() => expect(document.body.textContent).toContain(`${evil}.csv`));
    expect(document.querySelector('img[src="x"]')).toBeNull();
    expect((window as unknown as { hit?: number }).hit).toBeUndefined();
    expect(editor.isDestroyed).toBe(false);
  });
});

describe('value', () => {
  // 30 fA and 0.2 fA over e f with f = 200 kHz exactly: e f = 32.04353268 fA (SI Brochure, 9th ed.: e exact).
  const doc = docOf(
    paragraph('line_one', cell('value_f_1', 'f = 200 kHz exactly'), text(' and '), cell('value_I_1', 'I = 30.0(2) fA')),
    paragraph('line_two', cell('value_n_1', 'n = I/(e*f)')),
  );

  it('shows symbol and result, and keeps the result in the document without an undo step', async () => {
    const { editor, json } = await sheet(doc);
    await screen.findByRole('button', { name: /^value n = 0\.936/ });
    const shown = () => json().content![1]!.content![0]!.attrs!.shown as string;
    await waitFor(() => expect(shown()).toMatch(/^0\.936/));
    expect(editor.can().undo()).toBe(false);
    expect(() => checkDocument(json())).not.toThrow();
  });

  it('opens with Enter, recalculates what depends on it while typing, commits with Enter', async () => {
    const { editor, json, press } = await sheet(doc);
    await screen.findByRole('button', { name: /^value n = 0\.936/ });
    const user = userEvent.setup();
    editor.chain().focus().setNodeSelection(1).run();
    press('Enter');
    const field = await screen.findByRole('textbox', { name: /Value: symbol/ });
    await user.clear(field);
    await user.type(field, 'f = 100 kHz exactly');
    await screen.findByRole('button', { name: /^value n = 1\.872/ });
    expect(json().content![0]!.content![0]!.attrs!.source).toBe('f = 200 kHz exactly');
    await user.keyboard('{Enter}');
    await waitFor(() => expect(json().content![0]!.content![0]!.attrs!.source).toBe('f = 100 kHz exactly'));
    expect(screen.queryByRole('textbox', { name: /Value: symbol/ })).toBeNull();
  });

  it('Escape leaves the line as it was; an empty new one disappears', async () => {
    const { editor, json } = await sheet(doc);
    const user = userEvent.setup();
    editor.commands.setTextSelection(editor.state.doc.content.size - 1);
    insertValue(editor);
    const field = await screen.findByRole('textbox', { name: /Value: symbol/ });
    await user.type(field, 'x = 3');
    await user.keyboard('{Escape}');
    await waitFor(() => expect(JSON.stringify(json())).not.toContain('"source":""'));
    expect(JSON.stringify(json())).not.toContain('x = 3');
  });

  it('says at the cell what is wrong', async () => {
    await sheet(docOf(paragraph('line_one', cell('value_x_1', 'x = nowhere + 1'))));
    const shown = await screen.findByRole('button', { name: /in error/ });
    expect(within(shown).getByText(/nowhere/, { selector: '.value-problem' })).toBeTruthy();
  });
});

describe('writing', () => {
  it('Ctrl+; puts a time-stamped line, Enter the next, Enter in an empty one ends the log', async () => {
    const { editor, json, press } = await sheet(docOf(paragraph('line_one')));
    vi.useFakeTimers({ toFake: ['Date'], now: new Date('2026-11-19T08:14:05Z') });
    try {
      editor.commands.focus();
      insertLogLine(editor);
      editor.commands.insertContent('drive on');
      press('Enter');
      press('Enter');
    } finally {
      vi.useRealTimers();
    }
    const blocks = json().content!;
    expect(blocks.map((block) => block.type)).toEqual(['logLine', 'paragraph']);
    expect(Date.parse(blocks[0]!.attrs!.at as string)).toBe(Date.parse('2026-11-19T08:14:05Z'));
    expect(() => checkDocument(json())).not.toThrow();
  });

  it('names the blocks that a keystroke changed, and no others', async () => {
    const { editor, seen } = await sheet(docOf(paragraph('line_one', text('a')), paragraph('line_two', text('b'))));
    editor.commands.insertContentAt(5, 'c');
    expect(seen.changed).toEqual([['line_two']]);
  });

  it('$…$ becomes an equation, prices do not', async () => {
    const { editor, json } = await sheet(docOf(paragraph('line_one')));
    const type = (words: string) => {
      for (const letter of words) {
        const { from, to } = editor.state.selection;
        const taken = editor.view.someProp('handleTextInput', (handle) =>
          handle(editor.view, from, to, letter, () => editor.state.tr.insertText(letter, from, to)),
        );
        if (!taken) editor.view.dispatch(editor.state.tr.insertText(letter, from, to));
      }
    };
    editor.commands.focus();
    type('costs $5 and $6, with $\\tau$');
    const content = json().content![0]!.content!;
    expect(content.map((node) => node.type)).toEqual(['text', 'equation']);
    expect(content[0]!.text).toBe('costs $5 and $6, with ');
    expect(content[1]!.attrs).toEqual({ tex: '\\tau' });
  });

  it('Escape, then Tab is left to the browser; Tab alone is not', async () => {
    const list: NodeJson = {
      type: 'bulletList',
      attrs: { id: 'list_one' },
      content: ['a', 'b'].map((words) => ({
        type: 'listItem',
        content: [paragraph('', text(words))].map((p) => ({ ...p, attrs: { id: null } })),
      })),
    };
    const { editor, json, press } = await sheet(docOf(list));
    editor.commands.setTextSelection(8);
    press('Escape');
    expect(press('Tab')).toBe(false);
    expect(json().content![0]!.content).toHaveLength(2);
    expect(press('Tab')).toBe(true);
    expect(json().content![0]!.content).toHaveLength(1);
  });

  it('`/` opens the insert menu by keyboard and puts what was chosen', async () => {
    const { editor, json, press } = await sheet(docOf(paragraph('line_one')));
    editor.commands.focus();
    editor.view.dispatch(editor.state.tr.insertText('/check'));
    const option = await screen.findByRole('option', { name: /Checklist/ });
    expect(option.getAttribute('aria-selected')).toBe('true');
    expect(editor.view.dom.getAttribute('aria-activedescendant')).toBe(option.id);
    press('Enter');
    await waitFor(() => expect(json().content![0]!.type).toBe('taskList'));
    expect(JSON.stringify(json())).not.toContain('/check');
  });

  it('takes 20 000 pasted characters', async () => {
    const { editor, json } = await sheet(docOf(paragraph('line_one')));
    const words = 'level 61 %, bath at 4.21 K. '.repeat(720);
    editor.view.pasteText(words, new Event('paste') as ClipboardEvent);
    expect(editor.getText().length).toBeGreaterThanOrEqual(20_000);
    expect(() => checkDocument(json())).not.toThrow();
  });

  it('acknowledging the caution keeps name and time', async () => {
    const { json } = await sheet(
      docOf({ type: 'caution', attrs: { id: 'caution_1', acknowledgedAt: null, acknowledgedBy: null } }),
    );
    await userEvent.setup().click(await screen.findByRole('button', { name: 'I have read this' }));
    const attrs = json().content![0]!.attrs!;
    expect(attrs.acknowledgedBy).toBe('Tomas Reinholt');
    expect(() => checkDocument(json())).not.toThrow();
    expect(document.body.textContent).toMatch(/laboratory’s own rules, the local law/);
  });
});

describe('paste from a spreadsheet', () => {
  it('reads rows and cells, and leaves prose alone', () => {
    expect(tableOfText('V/mV\tI/pA\r\n-620\t29.7\r\n-610\t\r\n')).toEqual([
      ['V/mV', 'I/pA'],
      ['-620', '29.7'],
      ['-610', ''],
    ]);
    expect(tableOfText('a line\nand another')).toBeNull();
    expect(tableOfText('one\tstray tab\nin prose\nof several\nlines here')).toBeNull();
  });

  it('makes a valid table whose first row of words is its head', async () => {
    const { editor } = await sheet(docOf(paragraph('line_one')));
    const node = tableNode(editor.schema, [
      ['V/mV', 'I/pA'],
      ['-620', '29.7'],
    ]);
    expect(node.firstChild!.firstChild!.type.name).toBe('tableHeader');
    expect(node.lastChild!.firstChild!.type.name).toBe('tableCell');
    expect(() => node.check()).not.toThrow();
  });
});
