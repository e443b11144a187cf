import typography from '@tailwindcss/typography';
import type { Config } from 'tailwindcss';

/** Colour roles are CSS variables of app/globals.css, so that both themes share one set of names. */
export default {
  content: ['./app/**/*.{ts,tsx}', './components/**/*.{ts,tsx}'],
  theme: {
    extend: {
      colors: {
        ink: 'var(--ink)',
        quiet: 'var(--quiet)',
        sheet: 'var(--sheet)',
        ground: 'var(--ground)',
        rule: 'var(--rule)',
        action: 'var(--action)',
        'on-action': 'var(--on-action)',
        attention: 'var(--attention)',
        'attention-ground': 'var(--attention-ground)',
        error: 'var(--error)',
        signed: 'var(--signed)',
        tint: 'var(--tint)',
      },
      fontFamily: {
        sans: ['IBM Plex Sans', 'system-ui', 'sans-serif'],
        serif: ['STIX Two Text', 'serif'],
        mono: ['IBM Plex Mono', 'monospace'],
        math: ['STIX Two Math', 'math'],
      },
    },
  },
  plugins: [typography],
} satisfies Config;
