'use client';

import { useEffect, useId, useState } from 'react';
import { ErrorSentence } from '@/components/ui/sentence';
import type { Span } from '@/lib/document/attributes';
import { isSymbol } from '@/lib/document/symbol';
import { axisLabel } from '@/lib/plot/axis';

type Props = {
  spans: Span[];
  axis: string;
  unit: string | null;
  /** An interval that was dragged or set with the keyboard, to be named. */
  proposed: [number, number] | null;
  onSpans: (spans: Span[]) => void;
  onDone: () => void;
};

/** Adds an interval to the span of that name, or founds one. Spans keep their order, and so their colours. */
export function withInterval(spans: Span[], name: string, axis: string, interval: [number, number]): Span[] {
  const sorted: [number, number] = [Math.min(...interval), Math.max(...interval)];
  if (!spans.some((span) => span.name === name)) return [...spans, { name, axis, intervals: [sorted] }];
  return spans.map((span) =>
    span.name === name ? { ...span, intervals: [...span.intervals, sorted].sort((a, b) => a[0] - b[0]) } : span,
  );
}

/** An end as somebody would write it: no zeros that nobody measured. */
const endText = (end: number) => String(Number(end.toPrecision(6))).replace('-', '−');

function readNumber(text: string): number | null {
  const value = Number(text.trim().replace(',', '.').replace('−', '-'));
  return text.trim() !== '' && Number.isFinite(value) ? value : null;
}

/** The named intervals of a plot: a list, and a form that takes what was dragged or typed. */
export function SpanEditor({ spans, axis, unit, proposed, onSpans, onDone }: Props) {
  const [name, setName] = useState('');
  const [from, setFrom] = useState('');
  const [to, setTo] = useState('');
  const [problem, setProblem] = useState<string | null>(null);
  const id = useId();
  useEffect(() => {
    if (!proposed) return;
    setFrom(String(Number(proposed[0].toPrecision(6))));
    setTo(String(Number(proposed[1].toPrecision(6))));
    document.getElementById(`${id}-name`)?.focus();
  }, [proposed, id]);

  const add = () => {
    const low = readNumber(from);
    const high = readNumber(to);
    const clash = spans.find((span) => span.name === name.trim() && span.axis !== axis);
    if (!isSymbol(name.trim()))
      setProblem('A span needs a name of letters, digits and _, beginning with a letter: on, off, A.');
    else if (low === null || high === null) setProblem('Both ends of the span must be numbers.');
    else if (low === high) setProblem('The span is empty: its ends are equal.');
    else if (clash) setProblem(`The span ${clash.name} lies on the axis ${clash.axis}. Choose another name.`);
    else {
      onSpans(withInterval(spans, name.trim(), axis, [low, high]));
      setProblem(null);
      setFrom('');
      setTo('');
      onDone();
    }
  };
  const label = axisLabel(axis, unit);
  return (
    <div className="mt-2 border-t border-rule pt-2">
      <div className="flex flex-wrap items-end gap-2">
        {(
          [
            ['name', 'Span', name, setName, 'w-24'],
            ['from', `from, ${label}`, from, setFrom, 'w-36'],
            ['to', `to, ${label}`, to, setTo, 'w-36'],
          ] as const
        ).map(([key, title, value, set, width]) => (
          <label key={key} htmlFor={`${id}-${key}`} className={`text-sm ${width}`}>
            {title}
            <input
              id={`${id}-${key}`}
              className="field figures"
              value={value}
              inputMode={key === 'name' ? undefined : 'decimal'}
              onChange={(event) => set(event.target.value)}
              onKeyDown={(event) => {
                if (event.key !== 'Enter') return;
                event.preventDefault();
                add();
              }}
            />
          </label>
        ))}
        <button type="button" className="press" onClick={add}>
          Name this span
        </button>
      </div>
      <ErrorSentence>{problem}</ErrorSentence>
      {spans.length > 0 ? (
        <ul className="mt-2 space-y-1 text-sm">
          {spans.flatMap((span) =>
            span.intervals.map(([low, high], i) => (
              <li key={`${span.name} ${i}`} className="flex flex-wrap items-center gap-2">
                <strong className="figures">{span.name}</strong>
                <span className="figures">
                  {endText(low)} to {endText(high)}
                  {span.axis === axis ? (unit ? ` ${unit}` : '') : ` of ${span.axis}`}
                </span>
                <button
                  type="button"
                  className="min-h-[24px] cursor-pointer px-1 text-action underline"
                  onClick={() =>
                    onSpans(
                      spans
                        .map((other) =>
                          other === span ? { ...other, intervals: other.intervals.filter((_, j) => j !== i) } : other,
                        )
                        .filter((other) => other.intervals.length > 0),
                    )
                  }
                >
                  remove
                  <span className="sr-only">
                    {' '}
                    the interval {endText(low)} to {endText(high)} of {span.name}
                  </span>
                </button>
              </li>
            )),
          )}
        </ul>
      ) : null}
    </div>
  );
}
