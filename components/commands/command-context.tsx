'use client';

import { createContext, useCallback, useContext, useEffect, useMemo, useState, type ReactNode } from 'react';

/** Something one can do here; shown in the command menu above what can be opened. */
export type Command = { key: string; title: string; detail: string; keys?: string; run: () => void };

/** Registers a page's or component's own commands; gives what takes them away again. */
type Offer = (commands: Command[]) => () => void;

// Two contexts: whoever offers commands must not be drawn again because commands were offered.
const OfferContext = createContext<Offer | null>(null);
const CommandsContext = createContext<Command[]>([]);

/** Holds the commands of whatever is on the page. Stands once, in the layout, around page and menu. */
export function CommandProvider({ children }: { children: ReactNode }) {
  const [offers, setOffers] = useState<Command[][]>([]);
  const offer = useCallback((commands: Command[]) => {
    setOffers((all) => [...all, commands]);
    return () => setOffers((all) => all.filter((other) => other !== commands));
  }, []);
  const commands = useMemo(() => offers.flat(), [offers]);
  return (
    <OfferContext.Provider value={offer}>
      <CommandsContext.Provider value={commands}>{children}</CommandsContext.Provider>
    </OfferContext.Provider>
  );
}

/** The commands on offer; none outside a provider. */
export function useCommands(): Command[] {
  return useContext(CommandsContext);
}

/** Offers a page's commands while it is shown. `commands` has to be memoised. */
export function usePageCommands(commands: Command[]): void {
  const offer = useContext(OfferContext);
  useEffect(() => offer?.(commands), [offer, commands]);
}
