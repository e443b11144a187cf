import { Node } from '@tiptap/core';

/**
 * The document. Traces, log lines, cautions and pictures (group `sheet`) stand at its top level only, so that each has
 * its own time in the gutter and its own place for questions.
 */
export const sheet = Node.create({ name: 'doc', topNode: true, content: '(block | sheet)+' });
