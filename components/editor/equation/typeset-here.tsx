'use client';

import { useSheet } from '@/components/editor/sheet-context/context';
import { useFetched } from '@/components/ui/use-fetched';
import { equationKey } from '@/lib/document/equation-key';

const loadTypeset = () => import('./typeset').then((module) => module.Typeset);

/**
 * An equation typeset in the browser: as the server has typeset it already where the page came with it, else by KaTeX,
 * which is fetched with the first equation that is new here. Until then the TeX stands as it was written.
 */
export function TypesetHere({ tex, display }: { tex: string; display: boolean }) {
  const { equations } = useSheet();
  const key = equationKey(tex, display);
  const ready = Object.hasOwn(equations, key) ? equations[key] : undefined;
  const { part: Typeset, problem } = useFetched(ready === undefined, loadTypeset);
  // Only KaTeX's own markup is inserted.
  if (ready !== undefined) return <span dangerouslySetInnerHTML={{ __html: ready }} />;
  if (Typeset) return <Typeset tex={tex} display={display} />;
  return (
    <span>
      <code>{tex}</code> {problem ? <span className="text-error">{problem}</span> : null}
    </span>
  );
}
