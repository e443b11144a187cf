import { renderToReactElement } from '@tiptap/static-renderer/pm/react';
import { documentExtensions } from '@/lib/document/extensions';
import type { DocumentJson } from '@/lib/document/json';

/** The text as the server can already send it, before the editor stands: words, tables, values with their results. */
export function StaticText({ doc }: { doc: DocumentJson }) {
  return (
    <div className="entry-text ProseMirror">
      {renderToReactElement({ extensions: documentExtensions, content: doc })}
    </div>
  );
}
