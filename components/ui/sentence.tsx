import type { ReactNode } from 'react';

/** A sentence about something that went wrong, beside what it concerns. */
export function ErrorSentence({ children, id }: { children: ReactNode; id?: string }) {
  if (!children) return null;
  return (
    <p id={id} role="alert" className="my-2 border-l-4 border-error pl-3 text-error">
      {children}
    </p>
  );
}

/** A sentence that asks for attention without being an error. */
export function AttentionSentence({ children }: { children: ReactNode }) {
  return <div className="my-2 border-l-4 border-attention bg-attention-ground px-3 py-2 text-ink">{children}</div>;
}
