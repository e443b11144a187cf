import { Node } from '@tiptap/core';
import { valueNodeSchema } from '@/lib/document/attributes';
import { attributeRule } from './attribute-rule';

const shape = valueNodeSchema.shape;

/** A calculated cell in the text: the line as typed and the result as its author last saw it. */
export const value = Node.create({
  name: 'value',
  group: 'inline',
  inline: true,
  atom: true,
  addAttributes: () => ({
    source: attributeRule('source', shape.source, ''),
    unit: attributeRule('unit', shape.unit, null),
    digits: attributeRule('digits', shape.digits, null),
    shown: attributeRule('shown', shape.shown, null),
  }),
  parseHTML: () => [{ tag: 'span[data-kelvinleaf="value"]' }],
  renderHTML: ({ HTMLAttributes, node }) => [
    'span',
    { ...HTMLAttributes, 'data-kelvinleaf': 'value' },
    valueLine(node.attrs.source, node.attrs.shown),
  ],
  renderText: ({ node }) => valueLine(node.attrs.source, node.attrs.shown),
});

/** `P_esc = 0.9191(47)` where a result is known, else the line as typed. */
export function valueLine(source: unknown, shown: unknown): string {
  const line = typeof source === 'string' ? source : '';
  if (typeof shown !== 'string' || shown === '') return line;
  const cut = line.indexOf('=');
  const symbol = cut > 0 ? line.slice(0, cut).trim() : '';
  return symbol ? `${symbol} = ${shown}` : shown;
}
