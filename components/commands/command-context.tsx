'use client';

import { createContext, useCallback, useContext, useEffect, useMemo, useState, type ReactNode } from 'react';

/** Something one can do here; shown in the command menu above what can be opened. */
export type Command = { key: string; title: string; detail: string; keys?: string; run: () => void };

type CommandContextValue = {
  commands: Command[];
  /** Registers a page's or component's own commands; gives what takes them away again. */
  offer: (commands: Command[]) => () => void;
};

const CommandContext = createContext<CommandContextValue | null>(null);

/** Holds the commands of whatever is on the page. Stands once, in the layout, around page and menu. */
export function CommandProvider({ children }: { children: ReactNode }) {
  const [offers, setOffers] = useState<Command[][]>([]);
  const offer = useCallback((commands: Command[]) => {
    setOffers((all) => [...all, commands]);
    return () => setOffers((all) => all.filter((other) => other !== commands));
  }, []);
  const value = useMemo(() => ({ commands: offers.flat(), offer }), [offers, offer]);
  return <CommandContext.Provider value={value}>{children}</CommandContext.Provider>;
}

/** The commands on offer; none outside a provider. */
export function useCommands(): Command[] {
  return useContext(CommandContext)?.commands ?? [];
}

/** Offers a page's commands while it is shown. `commands` has to be memoised. */
export function usePageCommands(commands: Command[]): void {
  const offer = useContext(CommandContext)?.offer;
  useEffect(() => offer?.(commands), [offer, commands]);
}
