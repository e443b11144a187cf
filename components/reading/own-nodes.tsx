import type { ReactNode } from 'react';
import { CautionText } from '@/components/editor/caution/caution-text';
import { Typeset } from '@/components/editor/equation/typeset';
import { ValueText } from '@/components/editor/value/value-text';
import { settingsProblems } from '@/components/trace/first-settings';
import { stated } from '@/components/trace/stated';
import { TraceDetails } from '@/components/trace/trace-details';
import { Facts } from '@/components/ui/facts';
import type { TraceNodeAttributes, ValueNodeAttributes } from '@/lib/document/attributes';
import type { NodeJson } from '@/lib/document/json';
import { valueLine } from '@/lib/document/value-line';
import type { ValueResult } from '@/lib/expression/contract';
import { ReadingPicture } from './picture';
import { ReadingTrace } from './trace';
import { ReadingValue } from './value';

/** What every node may need of its version. */
export type Bound = { values: ReadonlyMap<string, ValueResult> };

const words = (value: unknown) => (typeof value === 'string' ? value : '');

/** A value or an equation within a line. */
export function readingValue(node: NodeJson, bound: Bound): ReactNode {
  if (node.type === 'equation') {
    return (
      <span className="equation">
        <Typeset tex={words(node.attrs?.tex)} display={false} />
      </span>
    );
  }
  const { id, source, shown: seen } = node.attrs as ValueNodeAttributes;
  const result = bound.values.get(id);
  const problem = result?.state === 'error' ? (result.error?.message ?? null) : null;
  const shown = result?.state === 'ok' ? result.text : result ? null : seen;
  return (
    <ReadingValue id={id} words={problem ? source : valueLine(source, shown)} problem={problem}>
      <ValueText source={source} shown={problem ? null : shown} symbol={result?.symbol ?? null} />
    </ReadingValue>
  );
}

/** A block of one of the document's own kinds. */
export function ownBlock(node: NodeJson, bound: Bound, line: ReactNode): ReactNode {
  const attrs = node.attrs ?? {};
  const id = words(attrs.id);
  switch (node.type) {
    case 'equationBlock':
      return (
        <div className="equation-block" data-id={id || undefined}>
          <Typeset tex={words(attrs.tex)} display />
        </div>
      );
    case 'logLine': {
      const at = words(attrs.at);
      return (
        <div className="log-line" data-id={id}>
          <time dateTime={at} className="figures" title={at}>
            {at.slice(11, 19)}
          </time>
          <div className="log-text">{line}</div>
        </div>
      );
    }
    case 'caution':
      return (
        <div className="caution" data-id={id} role="note" aria-label="Caution">
          <CautionText at={words(attrs.acknowledgedAt) || null} by={words(attrs.acknowledgedBy) || null} />
        </div>
      );
    case 'picture':
      return (
        <ReadingPicture
          id={id}
          pictureId={words(attrs.pictureId)}
          alt={words(attrs.alt)}
          caption={words(attrs.caption)}
        />
      );
    case 'trace':
      return <TraceOf attributes={node.attrs as TraceNodeAttributes} bound={bound} />;
    default:
      // The schema knows all kinds; one from a later edition is named rather than left out.
      return <p className="text-error">A block of the kind “{node.type}”, which this edition cannot show.</p>;
  }
}

function TraceOf({ attributes, bound }: { attributes: TraceNodeAttributes; bound: Bound }) {
  const { handle, settings } = attributes;
  const head = `${handle}.`;
  const derived = [...bound.values.values()].flatMap(({ symbol, state, unit, value }) =>
    state === 'ok' && value === null && symbol?.startsWith(head) ? [{ symbol: symbol.slice(head.length), unit }] : [],
  );
  return (
    <ReadingTrace attributes={attributes} derived={derived}>
      <TraceDetails handle={handle} open={Object.keys(settingsProblems(settings)).length} unfold={false}>
        <Facts facts={stated(settings)} />
      </TraceDetails>
    </ReadingTrace>
  );
}
