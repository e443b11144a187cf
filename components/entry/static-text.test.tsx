import { renderToString } from 'react-dom/server';
import { describe, expect, it } from 'vitest';
import type { DocumentJson } from '@/lib/document/json';
import { sampleDocument } from '@/lib/document/sample';
import { StaticText } from './static-text';

describe('the text as the server sends it', () => {
  it('shows words, cells and values before the editor stands', () => {
    const markup = renderToString(<StaticText doc={sampleDocument()} />);
    for (const words of ['Bath at 4.21 K', 'One working point', 'f = 200', 'Relief valves free', '61 %'])
      expect(markup).toContain(words);
  });

  it('72, 73: markup in text, names and attributes stays text', () => {
    const evil = '</script><img src=x onerror=alert(1)>';
    const doc: DocumentJson = {
      type: 'doc',
      content: [
        { type: 'paragraph', attrs: { id: 'line_one' }, content: [{ type: 'text', text: evil }] },
        {
          type: 'paragraph',
          attrs: { id: 'line_two' },
          content: [
            {
              type: 'value',
              attrs: { id: 'value_one', source: `x = "${evil}"`, unit: null, digits: null, shown: evil },
            },
          ],
        },
        { type: 'equationBlock', attrs: { id: 'equation_1', tex: evil } },
      ],
    };
    const markup = renderToString(<StaticText doc={doc} />);
    expect(markup).not.toMatch(/<\/script|<img/);
    expect(markup).toContain('&lt;img src=x');
  });
});
