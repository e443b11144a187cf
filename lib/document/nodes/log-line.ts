import { Node } from '@tiptap/core';
import { clockTimeSchema } from '@/lib/document/attributes';
import { attributeRule, readAttribute } from './attribute-rule';

/** A line of the day's log: text after the time at which it was begun, by the writer's clock. */
export const logLine = Node.create({
  name: 'logLine',
  group: 'sheet',
  content: 'inline*',
  defining: true,
  addAttributes: () => ({ at: { ...attributeRule('at', clockTimeSchema), keepOnSplit: false } }),
  parseHTML: () => [
    {
      tag: 'p[data-kelvinleaf="log-line"]',
      priority: 60,
      getAttrs: (element) => (readAttribute(element, 'at', clockTimeSchema) === undefined ? false : null),
    },
  ],
  renderHTML: ({ HTMLAttributes }) => ['p', { ...HTMLAttributes, 'data-kelvinleaf': 'log-line' }, 0],
});
