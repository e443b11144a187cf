import { equationKey } from './equation-key';
import { walkDocument, type DocumentJson } from './json';
import { typeset } from './katex';

/** Markup of the document's equations by `equationKey`; those with a problem are left to who shows the problem. */
export function typesetAll(doc: DocumentJson): Record<string, string> {
  const markup: Record<string, string> = {};
  walkDocument(doc, ({ type, attrs }) => {
    if (type !== 'equation' && type !== 'equationBlock') return;
    const tex = String(attrs?.tex ?? '');
    const outcome = typeset(tex, type === 'equationBlock');
    if ('markup' in outcome) markup[equationKey(tex, type === 'equationBlock')] = outcome.markup;
  });
  return markup;
}
