import { Node } from '@tiptap/core';
import { cautionNodeSchema } from '@/lib/document/attributes';
import { attributeRule } from './attribute-rule';

const shape = cautionNodeSchema.shape;

/**
 * The caution that opens a cooldown day. Its wording is fixed in lib/document/caution-text; the document keeps only
 * who acknowledged it and when. A pasted one starts unacknowledged: nobody acknowledges by clipboard.
 */
export const caution = Node.create({
  name: 'caution',
  group: 'sheet',
  atom: true,
  addAttributes: () => ({
    acknowledgedAt: { ...attributeRule('acknowledgedAt', shape.acknowledgedAt, null), parseHTML: () => null },
    acknowledgedBy: { ...attributeRule('acknowledgedBy', shape.acknowledgedBy, null), parseHTML: () => null },
  }),
  parseHTML: () => [{ tag: 'div[data-kelvinleaf="caution"]' }],
  renderHTML: ({ HTMLAttributes }) => ['div', { ...HTMLAttributes, 'data-kelvinleaf': 'caution' }],
});
