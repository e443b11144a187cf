import type { Extensions } from '@tiptap/core';
import { Placeholder } from '@tiptap/extensions';
import { textExtensions } from '@/lib/document/extensions';
import type { EditorHost } from './actions';
import { cautionWithView } from './caution/extension';
import { equationBlockWithView, equationWithView } from './equation/extension';
import { insertMenu } from './insert-menu/extension';
import { leave } from './leave';
import { logLineWithView } from './log-line/extension';
import { paste } from './paste';
import { pictureWithView } from './picture/extension';
import { questionSlots } from './question-slots';
import { stamps } from './stamps';
import { traceWithView } from './trace/extension';
import { valueWithView } from './value/extension';

const views: Extensions = [
  equationWithView,
  equationBlockWithView,
  logLineWithView,
  cautionWithView,
  traceWithView,
  valueWithView,
  pictureWithView,
];

/** The document with its views, read-only. */
export const readingExtensions: Extensions = [...textExtensions, ...views, stamps, questionSlots];

/** The document with its views and everything that writes. */
export function writingExtensions(host: EditorHost): Extensions {
  return [
    ...readingExtensions,
    insertMenu.configure({ host }),
    paste.configure({ host }),
    leave,
    Placeholder.configure({
      placeholder: ({ node }) => (node.type.name === 'heading' ? 'Heading' : 'Write, or / for what can stand here'),
    }),
  ];
}
