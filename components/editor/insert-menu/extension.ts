import { Extension } from '@tiptap/core';
import { PluginKey } from '@tiptap/pm/state';
import { ReactRenderer } from '@tiptap/react';
import { exitSuggestion, Suggestion, type SuggestionProps } from '@tiptap/suggestion';
import { editorActions, findActions, type EditorAction, type EditorHost } from '@/components/editor/actions';
import { InsertMenu, insertMenuId, optionId } from './menu';

const key = new PluginKey('insert-menu');

type Open = { component: ReactRenderer; unmount: () => void; props: SuggestionProps<EditorAction>; chosen: number };

/** The menu on `/`: at the start of a line or after a space, so that `I/e` stays what it is. */
export const insertMenu = Extension.create<{ host: EditorHost }>({
  name: 'insertMenu',
  addProseMirrorPlugins() {
    const { editor } = this;
    const actions = editorActions(this.options.host);
    let open: Open | null = null;

    const show = () => {
      if (!open) return;
      const { props, chosen } = open;
      open.component.updateProps({ items: props.items, chosen, onChoose: props.command });
      const item = props.items[chosen];
      const { dom } = editor.view;
      dom.setAttribute('aria-controls', insertMenuId);
      if (item) dom.setAttribute('aria-activedescendant', optionId(item.key));
      else dom.removeAttribute('aria-activedescendant');
    };
    const close = () => {
      open?.unmount();
      open?.component.destroy();
      open = null;
      editor.view.dom.removeAttribute('aria-activedescendant');
      editor.view.dom.removeAttribute('aria-controls');
    };

    return [
      Suggestion<EditorAction, EditorAction>({
        editor,
        pluginKey: key,
        char: '/',
        allowedPrefixes: [' ', '\u00a0'],
        allow: ({ state }) => !state.selection.$from.parent.type.spec.code,
        items: ({ query }) => findActions(actions, query).slice(0, 12),
        command: ({ editor: target, range, props }) => {
          target.chain().focus().deleteRange(range).run();
          props.run(target);
        },
        render: () => ({
          onStart: (props) => {
            const component = new ReactRenderer(InsertMenu, {
              editor,
              props: { items: props.items, chosen: 0, onChoose: props.command },
            });
            open = { component, unmount: props.mount(component.element as HTMLElement), props, chosen: 0 };
            show();
          },
          onUpdate: (props) => {
            if (!open) return;
            open.props = props;
            open.chosen = Math.min(open.chosen, Math.max(props.items.length - 1, 0));
            show();
          },
          onExit: close,
          onKeyDown: ({ event, view }) => {
            if (!open) return false;
            const { items } = open.props;
            if (event.key === 'Escape') {
              exitSuggestion(view, key);
              return true;
            }
            const step = event.key === 'ArrowDown' ? 1 : event.key === 'ArrowUp' ? -1 : 0;
            if (step !== 0 && items.length > 0) {
              open.chosen = (open.chosen + step + items.length) % items.length;
              show();
              return true;
            }
            const item = items[open.chosen];
            if ((event.key === 'Enter' || event.key === 'Tab') && item) {
              open.props.command(item);
              return true;
            }
            return false;
          },
        }),
      }),
    ];
  },
});
