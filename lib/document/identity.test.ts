// @vitest-environment jsdom
import { Editor } from '@tiptap/core';
import { afterEach, describe, expect, it } from 'vitest';
import { checkDocument } from './check';
import { documentExtensions } from './extensions';
import type { NodeJson } from './json';
import { sampleDocument, sampleTrace } from './sample';

const open: Editor[] = [];
afterEach(() => open.splice(0).forEach((editor) => editor.destroy()));

function editorOf(...content: NodeJson[]): Editor {
  const editor = new Editor({ extensions: documentExtensions, content: { type: 'doc', content } });
  open.push(editor);
  return editor;
}
const line = (id: string | null, text: string): NodeJson => ({
  type: 'paragraph',
  attrs: { id },
  content: [{ type: 'text', text }],
});
const ids = (editor: Editor) => (editor.getJSON().content ?? []).map((block) => block.attrs?.id as string);

describe('identity of blocks', () => {
  it('carries every node from JSON through the editor to JSON, and through HTML back', () => {
    const editor = editorOf(...sampleDocument().content!);
    expect(editor.getJSON()).toEqual(sampleDocument());
    const copy = new Editor({ extensions: documentExtensions, content: editor.getHTML() });
    open.push(copy);
    const expected = sampleDocument();
    expected.content![0]!.attrs = { id: 'caution_1', acknowledgedAt: null, acknowledgedBy: null };
    expect(copy.getJSON()).toEqual(expected);
  });

  it('fills what is missing when a document opens', async () => {
    const editor = editorOf(line(null, 'one'), line('second_1', 'two'));
    await new Promise((resolve) => editor.on('create', resolve));
    expect(ids(editor)[0]).toMatch(/^[\w-]{12}$/);
    expect(ids(editor)[1]).toBe('second_1');
  });

  it('gives the new half of a split paragraph its own id', () => {
    const editor = editorOf(line('first_01', 'one two'));
    editor.chain().setTextSelection(4).splitBlock().run();
    const [first, second] = ids(editor);
    expect(first).toBe('first_01');
    expect(second).toMatch(/^[\w-]{12}$/);
    expect(() => checkDocument(editor.getJSON())).not.toThrow();
  });

  it('lets the block that stood there keep its id when its copy is pasted above it', () => {
    const editor = editorOf(line('first_01', 'one'), line('second_1', 'two'));
    editor.commands.insertContentAt(0, line('second_1', 'two'));
    expect(ids(editor).slice(1)).toEqual(['first_01', 'second_1']);
    expect(ids(editor)[0]).not.toBe('second_1');
  });

  it('gives a copied trace the next free handle', () => {
    const editor = editorOf(sampleTrace(), line('second_1', 'two'));
    editor.commands.insertContentAt(editor.state.doc.content.size, sampleTrace());
    const handles = editor
      .getJSON()
      .content!.filter((n) => n.type === 'trace')
      .map((n) => n.attrs!.handle);
    expect(handles).toEqual(['t1', 't2']);
    expect(() => checkDocument(editor.getJSON())).not.toThrow();
  });

  it('undoes typing in one step although ids were given meanwhile', () => {
    const editor = editorOf(line('first_01', 'one'));
    editor.commands.insertContentAt(editor.state.doc.content.size, line('first_01', 'copy'));
    expect(ids(editor)).toHaveLength(2);
    editor.commands.undo();
    expect(editor.getJSON().content).toEqual([line('first_01', 'one')]);
  });
});
