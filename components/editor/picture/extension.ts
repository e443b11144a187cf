import type { Editor } from '@tiptap/core';
import { ReactNodeViewRenderer } from '@tiptap/react';
import { newBlockId } from '@/lib/document/block-id';
import { picture } from '@/lib/document/nodes/picture';
import { PictureView } from './view';

export function insertPicture(editor: Editor, pictureId: string, alt = ''): boolean {
  const node = { type: 'picture', attrs: { id: newBlockId(), pictureId, alt, caption: '' } };
  return editor
    .chain()
    .focus()
    .insertContent([node, { type: 'paragraph' }])
    .run();
}

export const pictureWithView = picture.extend({ addNodeView: () => ReactNodeViewRenderer(PictureView, { as: 'div' }) });
