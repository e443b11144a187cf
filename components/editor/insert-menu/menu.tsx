'use client';

import { useEffect, useRef } from 'react';
import type { EditorAction } from '@/components/editor/actions';

export const insertMenuId = 'insert-menu';
export const optionId = (key: string) => `insert-${key}`;

type Props = { items: EditorAction[]; chosen: number; onChoose: (item: EditorAction) => void };

/** What `/` can put here. The editor keeps the focus and names the active line by aria-activedescendant. */
export function InsertMenu({ items, chosen, onChoose }: Props) {
  const list = useRef<HTMLUListElement>(null);
  useEffect(() => {
    list.current?.children[chosen]?.scrollIntoView?.({ block: 'nearest' });
  }, [chosen]);
  return (
    <ul ref={list} id={insertMenuId} role="listbox" aria-label="Insert" className="insert-menu">
      {items.length === 0 ? <li className="text-quiet">Nothing of that name. Escape keeps the text.</li> : null}
      {items.map((item, index) => (
        <li
          key={item.key}
          id={optionId(item.key)}
          role="option"
          aria-selected={index === chosen}
          onMouseDown={(event) => {
            event.preventDefault();
            onChoose(item);
          }}
        >
          <span>{item.title}</span> <span className="text-quiet">{item.about}</span>
          {item.keys ? <kbd>{item.keys}</kbd> : null}
        </li>
      ))}
    </ul>
  );
}
