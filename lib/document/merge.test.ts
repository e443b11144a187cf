import { describe, expect, it } from 'vitest';
import { checkDocument } from './check';
import type { DocumentJson } from './json';
import { divergences, mergeDocuments, type Choice } from './merge';
import { sampleDocument } from './sample';
import { documentText } from './text';

function two(): { theirs: DocumentJson; mine: DocumentJson } {
  const [theirs, mine] = [sampleDocument(), sampleDocument()];
  const block = (doc: DocumentJson, id: string) => doc.content!.find((node) => node.attrs?.id === id)!;
  block(theirs, 'bath_line').content![0]!.text = 'Bath at 4.25 K. ';
  block(mine, 'bath_line').content![0]!.text = 'Bath at 4.19 K. ';
  block(mine, 'values_1').content![1]!.attrs!.source = 'f = 210 kHz exactly';
  (block(mine, 'trace_one_id').attrs!.spans as unknown[]) = [];
  mine.content!.push({
    type: 'paragraph',
    attrs: { id: 'only_mine' },
    content: [{ type: 'text', text: 'mine alone' }],
  });
  theirs.content!.push({
    type: 'paragraph',
    attrs: { id: 'only_their' },
    content: [{ type: 'text', text: 'theirs alone' }],
  });
  return { theirs, mine };
}

describe('mergeDocuments', () => {
  it('keeps every word of both where nothing was chosen, as a valid document', () => {
    const { theirs, mine } = two();
    const { doc, changed } = mergeDocuments(theirs, mine, new Map());
    expect(() => checkDocument(doc)).not.toThrow();
    const text = documentText(doc);
    for (const words of ['4.25 K', '4.19 K', 'mine alone', 'theirs alone']) expect(text).toContain(words);
    const traces = doc.content!.filter((node) => node.type === 'trace').map((node) => node.attrs!.handle);
    expect(traces).toEqual(['t1', 't2']);
    expect(changed).toContain('only_mine');
    expect(changed).not.toContain('only_their');
  });

  it.each<[Choice, DocumentJson]>([
    ['mine', two().mine],
    ['theirs', two().theirs],
  ])('gives %s back where that was chosen throughout', (choice, expected) => {
    const { theirs, mine } = two();
    const choices = new Map(divergences(theirs, mine).map(({ id }) => [id, choice]));
    expect(mergeDocuments(theirs, mine, choices).doc).toEqual(expected);
  });
});
