import type { ReactNode } from 'react';

type Props = {
  handle: string;
  /** How many things are still to be stated. */
  open: number;
  /** Unfolded at first. */
  unfold: boolean;
  children: ReactNode;
};

/** What its author says of a trace, below its plot. */
export function TraceDetails({ handle, open, unfold, children }: Props) {
  return (
    <details className="my-2" open={unfold || undefined}>
      <summary className="min-h-[24px] cursor-pointer text-action">
        Units, gains and scan of {handle}
        {open > 0 ? (
          <span className="text-error">
            : {open} {open === 1 ? 'thing' : 'things'} to state
          </span>
        ) : null}
      </summary>
      {children}
    </details>
  );
}
