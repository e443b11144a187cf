import type { ReactNode } from 'react';
import { Mark } from '@/components/ui/stair';
import { ThemeSwitch } from '@/components/ui/theme-switch';

export default function PublicLayout({ children }: { children: ReactNode }) {
  return (
    <div className="mx-auto max-w-5xl px-4 py-6">
      <header className="mb-8 flex items-center justify-between">
        <span className="flex items-center gap-2 font-semibold text-action">
          <Mark /> Kelvinleaf
        </span>
        <ThemeSwitch />
      </header>
      <main id="content">{children}</main>
    </div>
  );
}
