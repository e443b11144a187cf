import { describe, expect, it } from 'vitest';
import { documentDifference, textDifference } from './difference';
import type { DocumentJson } from './json';
import { sampleDocument } from './sample';

const block = (doc: DocumentJson, id: string) => doc.content!.find((node) => node.attrs?.id === id)!;
const change = (edit: (doc: DocumentJson) => void) => {
  const after = sampleDocument();
  edit(after);
  return documentDifference(sampleDocument(), after);
};
const of = (difference: ReturnType<typeof change>, id: string) => difference.blocks.find((entry) => entry.id === id)!;

describe('documentDifference', () => {
  it('finds nothing between equal documents', () => {
    const difference = documentDifference(sampleDocument(), sampleDocument());
    expect(difference.counts).toEqual({ added: 0, removed: 0, changed: 0, moved: 0 });
    expect(difference.blocks).toHaveLength(sampleDocument().content!.length);
  });

  it('shows a changed word, and joined parts give both texts back', () => {
    const parts = textDifference('Bath at 4.21 K, level 61 %.', 'Bath at 4.23 K, level 61 % by eye.');
    const joined = (drop: string) =>
      parts
        .filter((part) => part.change !== drop)
        .map((part) => part.text)
        .join('');
    expect(joined('added')).toBe('Bath at 4.21 K, level 61 %.');
    expect(joined('removed')).toBe('Bath at 4.23 K, level 61 % by eye.');
    expect(parts.some((part) => part.change === 'same' && part.text.includes('level 61 %'))).toBe(true);
  });

  it('names a value whose line or result changed', () => {
    const difference = change((doc) => {
      block(doc, 'values_1').content![1]!.attrs!.source = 'f = 210 kHz exactly';
      block(doc, 'values_1').content![1]!.attrs!.shown = '210 kHz';
    });
    expect(of(difference, 'values_1').values).toEqual([
      { about: 'f', before: 'f = 200 kHz exactly → 200\u2009kHz', after: 'f = 210 kHz exactly → 210 kHz' },
    ]);
    expect(difference.counts.changed).toBe(1);
  });

  it('names spans, gain and sign of a trace', () => {
    const difference = change((doc) => {
      const attrs = block(doc, 'trace_one_id').attrs as Record<string, never> & {
        spans: { intervals: number[][] }[];
        settings: { sign: string; columns: { gain: { text: string } }[] };
      };
      attrs.spans[0]!.intervals = [[17, 44]];
      attrs.settings.sign = 'reversed';
      attrs.settings.columns[1]!.gain.text = '1e9 V/A ± 80 ppm';
    });
    expect(of(difference, 'trace_one_id').facts).toEqual([
      { about: 'span on', before: 't: 16 to 44', after: 't: 17 to 44' },
      { about: 'column 2 (I), gain', before: '1e9 V/A ± 50 ppm, CAL-0181', after: '1e9 V/A ± 80 ppm, CAL-0181' },
      { about: 'sign', before: 'as recorded', after: 'reversed' },
    ]);
  });

  it('tells added, removed and moved blocks apart', () => {
    const difference = change((doc) => {
      doc.content = doc.content!.filter((node) => node.attrs?.id !== 'quote_1');
      doc.content.unshift(doc.content.pop()!);
      doc.content.push({ type: 'paragraph', attrs: { id: 'fresh_one' }, content: [{ type: 'text', text: 'new' }] });
    });
    expect(difference.counts).toEqual({ added: 1, removed: 1, changed: 0, moved: 1 });
    expect(of(difference, 'picture_1').moved).toBe(true);
    expect(of(difference, 'quote_1').parts).toEqual([{ text: 'as the manual says', change: 'removed' }]);
    const order = difference.blocks.map((entry) => entry.id);
    expect(order.indexOf('quote_1')).toBe(order.indexOf('ordered_1') + 1);
  });

  it('names a checklist line that was ticked off', () => {
    const difference = change((doc) => {
      block(doc, 'checks_1').content![0]!.attrs!.checked = false;
    });
    expect(of(difference, 'checks_1').facts).toEqual([
      { about: '“Relief valves free”', before: 'done', after: 'open' },
    ]);
  });
});
