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

const two = (n: number) => String(Math.trunc(Math.abs(n))).padStart(2, '0');

/** `2026-11-19T09:14:05+01:00`: the instant as a clock on the wall showed it, with its zone. */
export function clockTime(date: Date): string {
  const minutes = -date.getTimezoneOffset();
  const local = new Date(date.getTime() + minutes * 60_000).toISOString().slice(0, 19);
  return `${local}${minutes < 0 ? '-' : '+'}${two(minutes / 60)}:${two(minutes % 60)}`;
}
