import { ReactNodeViewRenderer } from '@tiptap/react';
import { caution } from '@/lib/document/nodes/caution';
import { CautionView } from './view';

export const cautionWithView = caution.extend({ addNodeView: () => ReactNodeViewRenderer(CautionView) });
