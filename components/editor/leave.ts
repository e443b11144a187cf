import { Extension } from '@tiptap/core';
import { Plugin, PluginKey } from '@tiptap/pm/state';

/**
 * The way out for the keyboard: after Escape, Tab moves the focus on instead of indenting or changing the cell.
 * Any other key ends it.
 */
export const leave = Extension.create({
  name: 'leave',
  priority: 2000,
  addProseMirrorPlugins() {
    let leaving = false;
    return [
      new Plugin({
        key: new PluginKey('leave'),
        props: {
          handleDOMEvents: {
            keydown: (_view, event) => {
              if (event.key === 'Shift') return false;
              const out = leaving && event.key === 'Tab';
              leaving = event.key === 'Escape';
              // True keeps the key from ProseMirror; its default, moving the focus, stays with the browser.
              return out;
            },
            blur: () => {
              leaving = false;
              return false;
            },
          },
        },
      }),
    ];
  },
});
