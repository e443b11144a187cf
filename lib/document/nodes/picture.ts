import { Node } from '@tiptap/core';
import { pictureNodeSchema } from '@/lib/document/attributes';
import { attributeRule, readAttribute } from './attribute-rule';

const shape = pictureNodeSchema.shape;

/** An image of the entry's own store; there is no way to show one from elsewhere. */
export const picture = Node.create({
  name: 'picture',
  group: 'sheet',
  atom: true,
  draggable: true,
  addAttributes: () => ({
    pictureId: attributeRule('pictureId', shape.pictureId),
    alt: attributeRule('alt', shape.alt, ''),
    caption: attributeRule('caption', shape.caption, ''),
  }),
  parseHTML: () => [
    {
      tag: 'figure[data-kelvinleaf="picture"]',
      getAttrs: (element) => (readAttribute(element, 'pictureId', shape.pictureId) === undefined ? false : null),
    },
  ],
  renderHTML: ({ HTMLAttributes }) => ['figure', { ...HTMLAttributes, 'data-kelvinleaf': 'picture' }],
  renderText: ({ node }) => String(node.attrs.caption || node.attrs.alt || ''),
});
