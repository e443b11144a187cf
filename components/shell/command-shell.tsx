'use client';

import type { ReactNode } from 'react';
import { CommandProvider } from '@/components/commands/command-context';
import { CommandMenu } from '@/components/commands/command-menu';

/** The command menu with the commands that the page inside offers. */
export function CommandShell({ children }: { children: ReactNode }) {
  return (
    <CommandProvider>
      {children}
      <CommandMenu />
    </CommandProvider>
  );
}
