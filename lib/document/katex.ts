import katex, { type KatexOptions } from 'katex';

/**
 * Bounds for TeX from strangers: no command that makes links, loads files or writes HTML attributes (`trust`), macros
 * that expand at most 200 times, nothing larger than 20 em.
 */
export const katexOptions = {
  trust: false,
  maxExpand: 200,
  maxSize: 20,
  output: 'htmlAndMathml',
  throwOnError: true,
  globalGroup: false,
  strict: (code: string) => (code === 'htmlExtension' || code === 'commentAtEnd' ? 'error' : 'ignore'),
} as const satisfies KatexOptions;

const longest = 8000;

/**
 * Markup of an equation, from KaTeX alone, or the problem as plain text (to be shown as text, never as markup).
 * A refused command, which KaTeX would typeset as its name in red, is a problem too.
 */
export function typeset(tex: string, display: boolean): { markup: string } | { problem: string } {
  if (tex.length > longest) return { problem: `The equation is longer than ${longest} characters.` };
  const refused = /\\(href|url|includegraphics|htmlClass|htmlId|htmlStyle|htmlData)(?![A-Za-z])/.exec(tex);
  if (refused) return { problem: `\\${refused[1]} is not allowed in an equation: it could lead outside this entry.` };
  try {
    return { markup: katex.renderToString(tex, { ...katexOptions, displayMode: display }) };
  } catch (error) {
    if (error instanceof katex.ParseError) return { problem: error.message.replace(/^KaTeX parse error: /, '') };
    if (error instanceof RangeError) return { problem: 'The equation is nested too deeply.' };
    throw error;
  }
}
