import { describe, expect, it } from 'vitest';
import { documentLimits, checkDocument } from '@/lib/document/check';
import type { NodeJson } from '@/lib/document/json';
import { sampleDocument } from '@/lib/document/sample';
import { AppError } from '@/lib/errors/app-error';

const refused = (json: unknown, sentence: RegExp) => {
  let problem: unknown;
  try {
    checkDocument(json);
  } catch (error) {
    problem = error;
  }
  expect(problem).toBeInstanceOf(AppError);
  expect((problem as AppError).status).toBe(422);
  expect((problem as AppError).message).toMatch(sentence);
};
const doc = (...content: unknown[]) => ({ type: 'doc', content });
const paragraph = (...content: unknown[]) => ({ type: 'paragraph', attrs: { id: 'aaaaaa' }, content });

describe('63 unknown nodes and marks', () => {
  it.each(['iframe', 'script', 'image', 'html', '__proto__', 'constructor', 'toString', ''])('node %j', (type) =>
    refused(doc({ type, attrs: { id: 'aaaaaa' } }), /no node/),
  );
  it.each(['underline', 'textStyle', 'constructor', 'hasOwnProperty'])('mark %j', (type) =>
    refused(doc(paragraph({ type: 'text', text: 'x', marks: [{ type }] })), /no mark/),
  );
  it('refuses fields that a node does not have', () =>
    refused(doc({ ...paragraph(), onclick: 'x' }), /a field “onclick”/));
  it('refuses a document in a document', () => refused(doc(doc(paragraph())), /has no id|shape/));
});

describe('64 attributes of the wrong type', () => {
  const wrong: [string, string, unknown][] = [
    ['heading_1', 'level', '2'],
    ['heading_1', 'level', 7],
    ['heading_1', 'onload', 'x'],
    ['bath_line', 'id', 'short'],
    ['bath_line', 'id', { toString: 'aaaaaa' }],
    ['bath_line', 'style', 'position:fixed'],
    ['log_line_1', 'at', 'yesterday'],
    ['log_line_1', 'at', 1700000000],
    ['trace_one_id', 'traceId', '../../etc/passwd'],
    ['trace_one_id', 'handle', 't1; drop'],
    ['trace_one_id', 'spans', 'all'],
    ['trace_one_id', 'view', []],
    ['trace_one_id', 'settings', null],
    ['equation_1', 'tex', ['x']],
    ['caution_1', 'acknowledgedAt', true],
    ['picture_1', 'pictureId', 'https://evil.example/a.png'],
    ['picture_1', 'alt', 4],
    ['ordered_1', 'start', 'x'],
    ['code_1', 'language', {}],
  ];
  it.each(wrong)('%s.%s = %j', (id, name, value) => {
    const sample = sampleDocument();
    const block = sample.content!.find((node) => node.attrs?.id === id)!;
    block.attrs![name] = value;
    refused(sample, /Block \d+: /);
  });
  it.each([
    ['source', 5],
    ['digits', 2.5],
    ['shown', {}],
    ['unit', false],
  ])('value.%s = %j', (name, value) => {
    const sample = sampleDocument();
    const cell = sample.content!.find((node) => node.attrs?.id === 'values_1')!.content![1]!;
    cell.attrs![name] = value;
    refused(sample, /Block 4: value/);
  });
  it('refuses huge table spans', () => {
    const sample = sampleDocument();
    const table = sample.content!.find((node) => node.type === 'table')!;
    table.content![0]!.content![0]!.attrs!.colspan = 1e9;
    refused(sample, /colspan/);
  });
});

describe('65 depth 1e5, width 1e6', () => {
  const nested = (levels: number, leaf: NodeJson): NodeJson => {
    let node = leaf;
    for (let i = 0; i < levels; i += 1) node = { type: 'blockquote', content: [node] };
    return node;
  };
  it('refuses depth 1e5 without overflowing the stack', () =>
    refused(doc(nested(100_000, { type: 'paragraph' })), /more than 64 levels/));
  it('refuses depth 1e5 inside an attribute', () => {
    let deep: unknown = 1;
    for (let i = 0; i < 100_000; i += 1) deep = [deep];
    refused(doc({ type: 'paragraph', attrs: { id: deep } }), /more than 64 levels/);
  });
  it('takes a document just within the depth', () => {
    const block = { ...nested(documentLimits.depth - 3, { type: 'paragraph' }), attrs: { id: 'aaaaaa' } };
    expect(() => checkDocument(doc(block))).not.toThrow();
  });
  it('refuses a million nodes in a row', () => {
    const one = { type: 'hardBreak' };
    const wide = { type: 'paragraph', attrs: { id: 'aaaaaa' }, content: new Array<unknown>(1_000_000).fill(one) };
    refused(doc(wide), /more than 50000 nodes/);
  });
  it('refuses more than 4 MB of text', () =>
    refused(doc(paragraph({ type: 'text', text: 'é'.repeat(2_200_000) })), /4 MB/));
});

describe('67 __proto__ keys', () => {
  it.each(['__proto__', 'constructor', 'prototype'])('in attributes: %s', (key) => {
    refused(
      JSON.parse(`{"type":"doc","content":[{"type":"paragraph","attrs":{"id":"aaaaaa","${key}":{"x":1}}}]}`),
      /field/,
    );
  });
  it('in a node, in a mark and deep in the settings of a trace', () => {
    refused(JSON.parse('{"type":"doc","__proto__":{"polluted":1},"content":[]}'), /field/);
    refused(
      doc(paragraph({ type: 'text', text: 'x', marks: [JSON.parse('{"type":"bold","__proto__":{"a":1}}')] })),
      /field/,
    );
    const text = JSON.stringify(sampleDocument()).replace('"drive":{', '"drive":{"__proto__":{"polluted":1},');
    refused(JSON.parse(text), /__proto__/);
    expect(({} as Record<string, unknown>).polluted).toBeUndefined();
  });
});
