import { Node } from '@tiptap/core';
import { traceNodeSchema } from '@/lib/document/attributes';
import { attributeRule, readAttribute } from './attribute-rule';

const shape = traceNodeSchema.shape;
const required = ['traceId', 'handle', 'settings', 'spans', 'view'] as const;

/** An attached raw file with what its author says of it: handle, columns, spans, view. */
export const trace = Node.create({
  name: 'trace',
  group: 'sheet',
  atom: true,
  addAttributes: () => ({
    traceId: attributeRule('traceId', shape.traceId),
    handle: attributeRule('handle', shape.handle),
    settings: attributeRule('settings', shape.settings),
    spans: attributeRule('spans', shape.spans),
    view: attributeRule('view', shape.view),
  }),
  parseHTML: () => [
    {
      tag: 'div[data-kelvinleaf="trace"]',
      getAttrs: (element) =>
        required.every((name) => readAttribute<unknown>(element, name, shape[name]) !== undefined) ? null : false,
    },
  ],
  renderHTML: ({ HTMLAttributes }) => ['div', { ...HTMLAttributes, 'data-kelvinleaf': 'trace' }],
  renderText: ({ node }) => String(node.attrs.handle),
});
