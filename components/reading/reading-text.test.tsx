import { renderToString } from 'react-dom/server';
import { describe, expect, it } from 'vitest';
import type { DocumentJson } from '@/lib/document/json';
import { sampleDocument } from '@/lib/document/sample';
import type { ValueResult } from '@/lib/expression/contract';
import { evaluateSheet } from '@/lib/expression/evaluate';
import type { BlockStamps, EntryDto, VersionContentDto } from '@/lib/schemas/entry';
import { ReadingSheet } from '@/components/entry/reading-sheet';
import { ReadingText } from './reading-text';

const tomas = { id: 'p1', name: 'Tomas Reinholt', initials: 'TR' };
const entry: EntryDto = {
  id: 'e1',
  notebook: { code: 'NB-03', title: 'Pumps' },
  leaf: 37,
  title: 'Escape over the exit barrier',
  workDate: '2026-11-19',
  state: 'signed',
  author: tomas,
  contributors: [],
  cooldown: null,
  devices: [],
  head: null,
  struckReason: null,
  questions: [],
  signatures: [],
  traces: [],
  may: { write: false, ask: false, answer: false, sign: false, countersign: false, strikeOut: false, invite: false },
  countersignObstacle: null,
  seen: { traces: 0, of: 0 },
  late: null,
};

/** The page as the server sends it: nothing of it has run in a browser. */
function sent(doc: DocumentJson, values: ValueResult[] = [], stamps: BlockStamps = {}): string {
  const version: VersionContentDto = {
    id: 'v1',
    entryId: 'e1',
    seq: 1,
    digest: '9f3a61c2'.repeat(8),
    previous: null,
    createdAt: '2026-11-19T12:00:00.000Z',
    createdBy: tomas,
    reason: null,
    title: 'Escape over the exit barrier',
    doc,
    stamps,
    values,
    traces: [],
  };
  const text = <ReadingText entry={entry} version={version} person={tomas} />;
  return renderToString(<ReadingSheet entry={entry} version={version} person={tomas} text={text} />);
}
const docOf = (...content: DocumentJson['content'] & object): DocumentJson => ({ type: 'doc', content });
const text = (words: string, ...marks: { type: string; attrs?: Record<string, unknown> }[]) => ({
  type: 'text',
  text: words,
  marks,
});
const value = (id: string, source: string, shown: string | null) => ({
  type: 'value',
  attrs: { id, source, unit: null, digits: null, shown },
});

describe('a version as the server sends it', () => {
  it('shows words, cells, values and equations without a script', () => {
    const markup = sent(sampleDocument());
    for (const words of ['Bath at 4.21 K', 'One working point', 'f = 200', 'Relief valves free', '61 %', 'trace t1'])
      expect(markup).toContain(words);
    expect(markup).toMatch(/class="katex".*<math/s);
    expect(markup).toContain('data-type="taskList"');
  });

  it('shows the results that the version has bound, not what a node says was seen', () => {
    const cell = value('value_f_01', 'f = 200 kHz exactly', 'something else');
    const { results } = evaluateSheet({ cells: [cell.attrs], traces: [] });
    const markup = sent(docOf({ type: 'paragraph', attrs: { id: 'line_one' }, content: [cell] }), [
      ...results.values(),
    ]);
    const shown = results.get('value_f_01')?.text ?? '';
    expect(shown).toMatch(/^200/);
    expect(markup).toContain(`aria-label="value f = ${shown}"`);
    expect(markup).not.toContain('something else');
  });

  it('says beside a value why it has no result', () => {
    const cell = value('value_x_01', 'x = y + 1', null);
    const { results } = evaluateSheet({ cells: [cell.attrs], traces: [] });
    const message = results.get('value_x_01')?.error?.message;
    expect(message).toBeTruthy();
    const markup = sent(docOf({ type: 'paragraph', attrs: { id: 'line_one' }, content: [cell] }), [
      ...results.values(),
    ]);
    expect(markup).toContain('value-error');
    expect(markup.replaceAll('&quot;', '"').replaceAll('&#x27;', '’')).toContain(message!.replaceAll("'", '’'));
  });

  it('writes into the gutter when a block was written, and by whom', () => {
    const first = { at: '2026-11-19T09:14:05+01:00', received: '2026-11-19T08:14:06.000Z', by: 'p1', offsetMs: 0 };
    const stamps = { line_one: { first, last: { ...first, at: '2026-11-20T10:00:00+01:00' }, digest: '' } };
    const markup = sent(docOf({ type: 'paragraph', attrs: { id: 'line_one' }, content: [text('one')] }), [], stamps);
    expect(markup).toContain('data-when="09:14 TR\n11-20 10:00 TR"');
  });

  it('nests marks, numbers lists from their start, and joins cells', () => {
    const item = { type: 'listItem', content: [{ type: 'paragraph', content: [text('five')] }] };
    const cell = { type: 'tableCell', attrs: { colspan: 2 }, content: [{ type: 'paragraph', content: [] }] };
    const markup = sent(
      docOf(
        { type: 'paragraph', attrs: { id: 'line_one' }, content: [text('x', { type: 'bold' }, { type: 'italic' })] },
        { type: 'orderedList', attrs: { id: 'list_one', start: 5 }, content: [item] },
        { type: 'table', attrs: { id: 'table_1' }, content: [{ type: 'tableRow', content: [cell] }] },
      ),
    );
    expect(markup).toContain('<strong><em>x</em></strong>');
    expect(markup).toMatch(/<ol[^>]*start="5"/);
    expect(markup).toMatch(/<td colSpan="2"><p><br\/><\/p><\/td>/i);
  });

  it('72, 73: markup in text, names and attributes stays text', () => {
    const evil = '</script><img src=x onerror=alert(1)>';
    const markup = sent(
      docOf(
        { type: 'paragraph', attrs: { id: 'line_one' }, content: [text(evil)] },
        { type: 'paragraph', attrs: { id: 'line_two' }, content: [value('value_one', `x = "${evil}"`, evil)] },
        { type: 'equationBlock', attrs: { id: 'equation_1', tex: evil } },
        { type: 'codeBlock', attrs: { id: 'code_one' }, content: [{ type: 'text', text: evil }] },
      ),
    );
    expect(markup).not.toMatch(/<\/script|<img/);
    expect(markup).toContain('&lt;img src=x');
  });

  it('a link that leads elsewhere than allowed is plain words', () => {
    const link = (href: string) => text(href, { type: 'link', attrs: { href } });
    const markup = sent(
      docOf({
        type: 'paragraph',
        attrs: { id: 'line_one' },
        content: [link('javascript:alert(1)'), link('https://example.org/a')],
      }),
    );
    expect(markup).not.toContain('href="javascript:');
    expect(markup).toContain('href="https://example.org/a"');
  });
});
