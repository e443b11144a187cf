import { Node } from '@tiptap/core';
import { valueNodeSchema } from '@/lib/document/attributes';
import { valueLine } from '@/lib/document/value-line';
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
