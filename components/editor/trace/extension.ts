import type { Editor } from '@tiptap/core';
import { ReactNodeViewRenderer } from '@tiptap/react';
import type { TraceNodeAttributes } from '@/lib/document/attributes';
import { newBlockId } from '@/lib/document/block-id';
import { freeHandle } from '@/lib/document/nodes/identity';
import { trace } from '@/lib/document/nodes/trace';
import type { TraceDto } from '@/lib/schemas/entry';
import { firstView } from '@/components/plot/trace-plot';
import { firstSettings } from '@/components/trace/first-settings';
import { TraceView } from './view';

/** What a trace node says before its author has said anything: the columns as found in the file, units as stated there. */
export function attributesForTrace(file: TraceDto, handle: string): TraceNodeAttributes {
  const settings = firstSettings(file.columns);
  return {
    id: newBlockId(),
    traceId: file.id,
    handle,
    settings,
    spans: [],
    view: firstView(settings.columns),
  };
}

export function handlesOf(editor: Editor): Set<string> {
  const taken = new Set<string>();
  editor.state.doc.forEach((block) => {
    if (block.type.name === 'trace') taken.add(String(block.attrs.handle));
  });
  return taken;
}

/** Puts a trace at the cursor under the next free handle, with a line to write on after it. */
export function insertTrace(editor: Editor, file: TraceDto, position?: number): boolean {
  const attrs = attributesForTrace(file, freeHandle('t', handlesOf(editor)));
  const content = [{ type: 'trace', attrs }, { type: 'paragraph' }];
  if (position !== undefined) return editor.commands.insertContentAt(position, content);
  return editor.chain().focus().insertContent(content).run();
}

export const traceWithView = trace.extend({
  addNodeView: () =>
    ReactNodeViewRenderer(TraceView, {
      // Dragging over the plot names spans; ProseMirror gets nothing of what happens inside.
      stopEvent: () => true,
    }),
});
