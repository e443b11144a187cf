import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { AppError } from '@/lib/errors/app-error';
import { checkDocument } from './check';
import { documentSchema, documentExtensions } from './extensions';
import { documentOfLayout, layouts, structureOf } from './layouts';
import { sampleDocument, sampleTrace } from './sample';
import { documentText } from './text';

const problem = (json: unknown): string => {
  try {
    checkDocument(json);
  } catch (error) {
    expect(error).toBeInstanceOf(AppError);
    expect((error as AppError).code).toBe('invalid');
    return (error as AppError).message;
  }
  throw new Error('the document was accepted');
};
const withBlock = (...blocks: unknown[]) => ({ type: 'doc', content: blocks });
const paragraph = (id: unknown, ...content: unknown[]) => ({ type: 'paragraph', attrs: { id }, content });

describe('checkDocument', () => {
  it('gives a document with every node and mark back unchanged', () => {
    const doc = sampleDocument();
    expect(checkDocument(doc)).toEqual(doc);
    expect(checkDocument(JSON.parse(JSON.stringify(doc)))).toEqual(doc);
    const types = new Set(
      JSON.stringify(doc)
        .match(/"type":"[A-Za-z]+"/g)
        ?.map((m) => m.slice(8, -1)),
    );
    const schema = documentSchema();
    for (const name of [...Object.keys(schema.nodes), ...Object.keys(schema.marks)]) expect(types).toContain(name);
    expect(documentExtensions.length).toBeGreaterThan(10);
  });

  it('asks for an id on every block, and a different one', () => {
    expect(problem(withBlock({ type: 'paragraph' }))).toMatch(/Block 1: has no id/);
    expect(problem(withBlock(paragraph('aaaaaa'), paragraph('aaaaaa')))).toMatch(
      /Block 2: the id “aaaaaa” is used twice/,
    );
  });

  it('refuses two traces of one handle', () => {
    const one = sampleTrace();
    const two = { ...one, attrs: { ...one.attrs, id: 'bbbbbbbb' } };
    expect(problem(withBlock(one, two))).toMatch(/handle “t1” names two traces/);
  });

  it('refuses sheet nodes inside other blocks', () => {
    const quote = { type: 'blockquote', attrs: { id: 'qqqqqq' }, content: [sampleTrace()] };
    expect(problem(withBlock(quote))).toMatch(/does not have the shape/);
  });

  it('refuses lone surrogates and NUL, accepts whole astral characters', () => {
    expect(problem(withBlock(paragraph('aaaaaa', { type: 'text', text: 'a\ud800b' })))).toMatch(/half of a character/);
    expect(problem(withBlock(paragraph('aaaaaa', { type: 'text', text: 'a\u0000' })))).toMatch(/NUL/);
    expect(() => checkDocument(withBlock(paragraph('aaaaaa', { type: 'text', text: '𝜏 = 1' })))).not.toThrow();
  });

  it('never throws anything but an AppError, whatever JSON it is given', () => {
    fc.assert(
      fc.property(fc.jsonValue({ maxDepth: 6 }), (json) => {
        try {
          checkDocument(json);
        } catch (error) {
          return error instanceof AppError;
        }
        return true;
      }),
      { numRuns: 300 },
    );
    for (const odd of [undefined, null, 3, 'doc', [], new Date(), new Map(), () => 1])
      expect(problem(odd)).toBeTruthy();
  });
});

describe('layouts', () => {
  it.each(layouts.map((layout) => layout.key))('%s is a valid document with fresh ids each time', (key) => {
    const [a, b] = [documentOfLayout(key), documentOfLayout(key)];
    expect(() => checkDocument(a)).not.toThrow();
    expect(documentText(a)).toBe(documentText(b));
    expect(JSON.stringify(a)).not.toBe(JSON.stringify(b));
  });

  it('keeps structure and drops what belongs to the day', () => {
    const layout = checkDocument(structureOf(sampleDocument()));
    const text = documentText(layout);
    expect(text).toContain('One working point');
    expect(text).toContain('Relief valves free');
    expect(text).toContain('quantity');
    expect(text).not.toContain('Bath at');
    expect(text).not.toContain('61 %');
    const kept = JSON.stringify(layout);
    for (const gone of [
      '"type":"trace"',
      '"type":"value"',
      '"type":"picture"',
      '"type":"logLine"',
      '"checked":true',
      'Tomas',
    ]) {
      expect(kept).not.toContain(gone);
    }
  });
});
