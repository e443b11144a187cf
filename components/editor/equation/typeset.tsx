import { useMemo } from 'react';
import { typeset } from '@/lib/document/katex';

/** An equation as KaTeX sets it, in the browser or on the server. Only KaTeX's own markup is inserted; a problem is shown as text beside the source. */
export function Typeset({ tex, display }: { tex: string; display: boolean }) {
  const outcome = useMemo(() => typeset(tex, display), [tex, display]);
  if ('markup' in outcome) return <span dangerouslySetInnerHTML={{ __html: outcome.markup }} />;
  return (
    <span>
      <code>{tex}</code> <span className="text-error">{outcome.problem}</span>
    </span>
  );
}
