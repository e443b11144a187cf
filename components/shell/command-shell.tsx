'use client';

import type { ReactNode } from 'react';
import { CommandProvider } from '@/components/commands/command-context';
import { CommandMenu } from '@/components/commands/command-menu';

// Dialogs hold the page still by a style element of their own; the page's policy lets it in by the nonce, which their library
// (get-nonce) reads under this name.
if (typeof document !== 'undefined') {
  Object.assign(globalThis, { __webpack_nonce__: document.querySelector<HTMLScriptElement>('script[nonce]')?.nonce });
}

/** The command menu with the commands that the page inside offers. */
export function CommandShell({ children }: { children: ReactNode }) {
  return (
    <CommandProvider>
      {children}
      <CommandMenu />
    </CommandProvider>
  );
}
