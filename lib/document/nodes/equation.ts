import { Node } from '@tiptap/core';
import { equationNodeSchema } from '@/lib/document/attributes';
import { attributeRule } from './attribute-rule';

const tex = attributeRule('tex', equationNodeSchema.shape.tex, '');

/** Inline equation: an atom with its TeX. */
export const equation = Node.create({
  name: 'equation',
  group: 'inline',
  inline: true,
  atom: true,
  addAttributes: () => ({ tex }),
  parseHTML: () => [{ tag: 'span[data-kelvinleaf="equation"]' }],
  renderHTML: ({ HTMLAttributes, node }) => [
    'span',
    { ...HTMLAttributes, 'data-kelvinleaf': 'equation' },
    `$${String(node.attrs.tex)}$`,
  ],
  renderText: ({ node }) => `$${String(node.attrs.tex)}$`,
});

/** Displayed equation: a block of its own. */
export const equationBlock = Node.create({
  name: 'equationBlock',
  group: 'block',
  atom: true,
  addAttributes: () => ({ tex }),
  parseHTML: () => [{ tag: 'div[data-kelvinleaf="equation"]' }],
  renderHTML: ({ HTMLAttributes, node }) => [
    'div',
    { ...HTMLAttributes, 'data-kelvinleaf': 'equation' },
    `$$${String(node.attrs.tex)}$$`,
  ],
  renderText: ({ node }) => `$$${String(node.attrs.tex)}$$`,
});
