'use client';

import type { Editor } from '@tiptap/core';
import { useEditorState } from '@tiptap/react';
import { useRef, useState } from 'react';
import { allowedLink } from '@/lib/document/nodes/link';
import { editorActions, type EditorHost } from './actions';

const styles = [
  { mark: 'bold', name: 'Bold', sign: 'B', keys: 'Ctrl+B' },
  { mark: 'italic', name: 'Italic', sign: 'I', keys: 'Ctrl+I' },
  { mark: 'strike', name: 'Struck out', sign: 'S', keys: 'Ctrl+Shift+S' },
  { mark: 'subscript', name: 'Subscript', sign: 'x₂', keys: 'Ctrl+,' },
  { mark: 'superscript', name: 'Superscript', sign: 'x²', keys: 'Ctrl+.' },
  { mark: 'code', name: 'Code in the line', sign: '{ }', keys: 'Ctrl+E' },
] as const;

const inBar = ['log', 'value', 'trace', 'picture', 'equation', 'table', 'checks'];

/** One row above the text: what is put in most, and the look of words. Arrow keys move inside, Tab leaves. */
export function Toolbar({ editor, host }: { editor: Editor; host: EditorHost }) {
  const bar = useRef<HTMLDivElement>(null);
  const [linking, setLinking] = useState(false);
  const active = useEditorState({
    editor,
    selector: ({ editor: now }) => ({
      marks: styles.filter(({ mark }) => now.isActive(mark)).map(({ mark }) => mark),
      inTable: now.isActive('table'),
      link: now.isActive('link'),
      empty: now.state.selection.empty,
    }),
  });
  const move = (event: React.KeyboardEvent) => {
    const step = event.key === 'ArrowRight' ? 1 : event.key === 'ArrowLeft' ? -1 : 0;
    if (step === 0 || event.target instanceof HTMLInputElement) return;
    const buttons = [...(bar.current?.querySelectorAll('button') ?? [])];
    const at = buttons.indexOf(event.target as HTMLButtonElement);
    event.preventDefault();
    buttons[(at + step + buttons.length) % buttons.length]?.focus();
  };
  const keepSelection = (event: React.MouseEvent) => event.preventDefault();
  const actions = editorActions(host).filter((action) => inBar.includes(action.key));
  const table = () => editor.chain().focus();
  return (
    <div ref={bar} role="toolbar" aria-label="Writing" className="toolbar" onKeyDown={move}>
      {actions.map((action, index) => (
        <button
          key={action.key}
          type="button"
          tabIndex={index === 0 ? 0 : -1}
          title={`${action.about}${action.keys ? ` (${action.keys})` : ''}`}
          onMouseDown={keepSelection}
          onClick={() => action.run(editor)}
        >
          {action.title}
        </button>
      ))}
      <span className="toolbar-gap" aria-hidden="true" />
      {styles.map(({ mark, name, sign, keys }) => (
        <button
          key={mark}
          type="button"
          tabIndex={-1}
          aria-label={name}
          aria-pressed={active.marks.includes(mark)}
          title={`${name} (${keys})`}
          onMouseDown={keepSelection}
          onClick={() => editor.chain().focus().toggleMark(mark).run()}
        >
          {sign}
        </button>
      ))}
      <button
        type="button"
        tabIndex={-1}
        aria-pressed={active.link}
        disabled={!active.link && active.empty}
        onMouseDown={keepSelection}
        onClick={() =>
          active.link ? editor.chain().focus().extendMarkRange('link').unsetMark('link').run() : setLinking(true)
        }
      >
        Link
      </button>
      {linking ? <LinkField editor={editor} onDone={() => setLinking(false)} /> : null}
      {active.inTable ? (
        <span role="group" aria-label="Table" className="toolbar-table">
          <button type="button" tabIndex={-1} onClick={() => table().addRowAfter().run()}>
            Row below
          </button>
          <button type="button" tabIndex={-1} onClick={() => table().addColumnAfter().run()}>
            Column right
          </button>
          <button type="button" tabIndex={-1} onClick={() => table().toggleHeaderRow().run()}>
            Head row
          </button>
          <button type="button" tabIndex={-1} onClick={() => table().deleteRow().run()}>
            Remove row
          </button>
          <button type="button" tabIndex={-1} onClick={() => table().deleteColumn().run()}>
            Remove column
          </button>
          <button type="button" tabIndex={-1} onClick={() => table().deleteTable().run()}>
            Remove table
          </button>
        </span>
      ) : null}
    </div>
  );
}

function LinkField({ editor, onDone }: { editor: Editor; onDone: () => void }) {
  const [href, setHref] = useState('https://');
  const allowed = allowedLink(href.trim());
  const set = () => {
    if (!allowed) return;
    editor.chain().focus().setMark('link', { href: allowed }).run();
    onDone();
  };
  return (
    <span className="link-field">
      <input
        className="field"
        aria-label="Address of the link"
        autoFocus
        value={href}
        onChange={(event) => setHref(event.target.value)}
        onKeyDown={(event) => {
          if (event.key === 'Enter') set();
          if (event.key === 'Escape') {
            onDone();
            editor.commands.focus();
          }
        }}
      />
      <button type="button" disabled={!allowed} onClick={set}>
        Set
      </button>
      <span role="status" className="text-quiet">
        {allowed || href === 'https://' ? '' : 'http, https, mailto, or /entries/… of this server'}
      </span>
    </span>
  );
}
