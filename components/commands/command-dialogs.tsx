'use client';

import { useRouter } from 'next/navigation';
import { Dialog } from 'radix-ui';
import { useEffect, useId, useMemo, useRef, useState } from 'react';
import { request } from '@/components/hooks/request';
import { useCommands, type Command } from './command-context';
import { KeyList } from './key-list';

type Found = { kind: 'entry' | 'notebook' | 'device' | 'cooldown'; title: string; detail: string; href: string };
type Line = { key: string; title: string; detail: string; keys?: string; act: () => void };

const places: { title: string; detail: string; href: string }[] = [
  { title: 'Today', detail: 'my drafts and what waits for me', href: '/' },
  { title: 'Notebooks', detail: 'all notebooks', href: '/notebooks' },
  { title: 'Cooldowns', detail: 'running and past', href: '/cooldowns' },
  { title: 'Devices', detail: 'chips and their gates', href: '/devices' },
  { title: 'Instruments', detail: 'meters, sources, certificates', href: '/instruments' },
  { title: 'Countersign', detail: 'entries that wait for me', href: '/countersign' },
  { title: 'Search', detail: 'in all text', href: '/search' },
  { title: 'Verify', detail: 'a digest or an archive', href: '/verify' },
  { title: 'Account', detail: 'profile, sessions, keys', href: '/account' },
];

const pause = 150;

export type Shown = 'menu' | 'keys' | null;

/** The command menu and the list of keys; fetched when one of them is first asked for. */
export function CommandDialogs({ shown, onShown }: { shown: Shown; onShown: (shown: Shown) => void }) {
  return (
    <>
      <Dialog.Root open={shown === 'menu'} onOpenChange={(open) => onShown(open ? 'menu' : null)}>
        <Dialog.Portal>
          <Dialog.Overlay className="dialog-shade" />
          <Dialog.Content className="dialog command-menu" aria-describedby={undefined}>
            <Dialog.Title className="sr-only">Find or do</Dialog.Title>
            <Finder onKeys={() => onShown('keys')} onDone={() => onShown(null)} />
          </Dialog.Content>
        </Dialog.Portal>
      </Dialog.Root>
      <KeyList open={shown === 'keys'} onOpenChange={(open) => onShown(open ? 'keys' : null)} />
    </>
  );
}

function matches(query: string, ...texts: string[]): boolean {
  const text = texts.join(' ').toLowerCase();
  return query
    .toLowerCase()
    .split(/\s+/)
    .every((word) => text.includes(word));
}

function Finder({ onKeys, onDone }: { onKeys: () => void; onDone: () => void }) {
  const router = useRouter();
  const commands = useCommands();
  const [query, setQuery] = useState('');
  const [chosen, setChosen] = useState(0);
  const { found, state } = useFound(query);
  const listId = useId();
  const list = useRef<HTMLUListElement>(null);

  const groups = useMemo(() => {
    const run = (act: () => void) => () => {
      onDone();
      act();
    };
    const own: Line[] = commands
      .filter((command: Command) => matches(query, command.title, command.detail))
      .map((command) => ({ ...command, act: run(command.run) }));
    const keys: Line = { key: 'keys', title: 'Keys', detail: 'what the keyboard can do', keys: '?', act: onKeys };
    if (matches(query, keys.title, keys.detail)) own.push(keys);
    const open: Line[] = [
      ...found.map((item) => ({
        key: item.href,
        title: item.title,
        detail: item.detail,
        act: run(() => router.push(item.href)),
      })),
      ...places
        .filter((place) => matches(query, place.title, place.detail))
        .map((place) => ({ key: place.href, ...place, act: run(() => router.push(place.href)) })),
    ];
    return [
      { title: 'Do', lines: own },
      { title: 'Open', lines: open },
    ].filter((group) => group.lines.length > 0);
  }, [commands, found, query, onDone, onKeys, router]);
  const lines = groups.flatMap((group) => group.lines);
  const at = Math.min(chosen, Math.max(0, lines.length - 1));

  useEffect(() => {
    list.current?.querySelector('[aria-selected="true"]')?.scrollIntoView?.({ block: 'nearest' });
  }, [at]);

  return (
    <>
      <input
        className="field"
        role="combobox"
        aria-label="Find or do"
        aria-expanded
        aria-controls={listId}
        aria-activedescendant={lines[at] ? `${listId}-${at}` : undefined}
        aria-autocomplete="list"
        autoComplete="off"
        spellCheck={false}
        autoFocus
        placeholder="Find or do"
        value={query}
        onChange={(event) => {
          setQuery(event.target.value);
          setChosen(0);
        }}
        onKeyDown={(event) => {
          const step = event.key === 'ArrowDown' ? 1 : event.key === 'ArrowUp' ? -1 : 0;
          if (step !== 0 && lines.length > 0) {
            event.preventDefault();
            setChosen((at + step + lines.length) % lines.length);
          } else if (event.key === 'Enter') {
            event.preventDefault();
            lines[at]?.act();
          }
        }}
      />
      <ul ref={list} id={listId} role="listbox" aria-label="Results">
        {groups.map((group) => (
          <li key={group.title} role="presentation">
            <p className="command-group" aria-hidden="true">
              {group.title}
            </p>
            <ul role="group" aria-label={group.title}>
              {group.lines.map((line) => {
                const index = lines.indexOf(line);
                return (
                  <li
                    key={line.key}
                    id={`${listId}-${index}`}
                    role="option"
                    aria-selected={index === at}
                    onMouseMove={() => setChosen(index)}
                    onClick={line.act}
                  >
                    <span>{line.title}</span> <span className="text-quiet">{line.detail}</span>
                    {line.keys ? <kbd>{line.keys}</kbd> : null}
                  </li>
                );
              })}
            </ul>
          </li>
        ))}
      </ul>
      <p role="status" className="command-state text-quiet">
        {state ?? (lines.length === 0 ? 'Nothing of that name.' : `${lines.length} to choose from`)}
      </p>
    </>
  );
}

/** Results of the server's search for what was typed, after a short pause; `state` says why there are none. */
function useFound(query: string): { found: Found[]; state: string | null } {
  const [found, setFound] = useState<Found[]>([]);
  const [state, setState] = useState<string | null>(null);
  useEffect(() => {
    const words = query.trim();
    if (words === '') {
      setFound([]);
      setState(null);
      return;
    }
    const stop = new AbortController();
    const timer = setTimeout(() => {
      setState('searching');
      request<{ results: Found[] }>('GET', `/api/find?q=${encodeURIComponent(words)}`, undefined, {
        signal: stop.signal,
      }).then(
        ({ results }) => {
          setFound(results);
          setState(null);
        },
        (error: unknown) => {
          if (stop.signal.aborted) return;
          setFound([]);
          setState(error instanceof Error ? error.message : 'The search failed.');
        },
      );
    }, pause);
    return () => {
      clearTimeout(timer);
      stop.abort();
    };
  }, [query]);
  return { found, state };
}
