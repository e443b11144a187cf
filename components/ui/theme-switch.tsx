'use client';

import { useEffect, useState } from 'react';

const choices = ['as the system', 'light', 'dark'] as const;
type Theme = (typeof choices)[number];

/** Light, dark, or as the system says; kept in a cookie, so that the server draws the right one at once. */
export function ThemeSwitch() {
  const [theme, setTheme] = useState<Theme>('as the system');
  useEffect(() => {
    const chosen = document.documentElement.dataset.theme;
    if (chosen === 'light' || chosen === 'dark') setTheme(chosen);
  }, []);
  const choose = (next: Theme) => {
    setTheme(next);
    if (next === 'as the system') delete document.documentElement.dataset.theme;
    else document.documentElement.dataset.theme = next;
    document.cookie = `theme=${next === 'as the system' ? '' : next}; path=/; max-age=31536000; samesite=lax`;
  };
  return (
    <label className="inline-flex items-center gap-2 text-sm text-quiet">
      <span>Theme</span>
      <select
        className="field !w-auto !py-0 text-sm"
        value={theme}
        onChange={(event) => choose(event.target.value as Theme)}
      >
        {choices.map((choice) => (
          <option key={choice}>{choice}</option>
        ))}
      </select>
    </label>
  );
}
