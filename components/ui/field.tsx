'use client';

import { useId, type InputHTMLAttributes, type ReactNode, type TextareaHTMLAttributes } from 'react';

type Common = { label: string; hint?: ReactNode; problem?: string | null };

/** A labelled input with its hint and its problem, tied together for screen readers. */
export function Field({ label, hint, problem, ...input }: Common & InputHTMLAttributes<HTMLInputElement>) {
  const id = useId();
  return (
    <div>
      <label htmlFor={id} className="font-medium">
        {label}
      </label>
      <input
        id={id}
        className="field"
        aria-invalid={problem ? true : undefined}
        aria-describedby={describedBy(id, hint, problem)}
        {...input}
      />
      <Notes id={id} hint={hint} problem={problem} />
    </div>
  );
}

export function LongField({ label, hint, problem, ...input }: Common & TextareaHTMLAttributes<HTMLTextAreaElement>) {
  const id = useId();
  return (
    <div>
      <label htmlFor={id} className="font-medium">
        {label}
      </label>
      <textarea
        id={id}
        className="field"
        rows={3}
        aria-invalid={problem ? true : undefined}
        aria-describedby={describedBy(id, hint, problem)}
        {...input}
      />
      <Notes id={id} hint={hint} problem={problem} />
    </div>
  );
}

export function Choice({
  label,
  options,
  hint,
  problem,
  ...select
}: Common & {
  options: readonly (string | { value: string; text: string })[];
} & React.SelectHTMLAttributes<HTMLSelectElement>) {
  const id = useId();
  return (
    <div>
      <label htmlFor={id} className="font-medium">
        {label}
      </label>
      <select id={id} className="field" aria-describedby={describedBy(id, hint, problem)} {...select}>
        {options.map((option) =>
          typeof option === 'string' ? (
            <option key={option}>{option}</option>
          ) : (
            <option key={option.value} value={option.value}>
              {option.text}
            </option>
          ),
        )}
      </select>
      <Notes id={id} hint={hint} problem={problem} />
    </div>
  );
}

function describedBy(id: string, hint: ReactNode, problem?: string | null): string | undefined {
  return [hint ? `${id}-hint` : null, problem ? `${id}-problem` : null].filter(Boolean).join(' ') || undefined;
}

function Notes({ id, hint, problem }: { id: string; hint?: ReactNode; problem?: string | null }) {
  return (
    <>
      {hint ? (
        <p id={`${id}-hint`} className="text-sm text-quiet">
          {hint}
        </p>
      ) : null}
      {problem ? (
        <p id={`${id}-problem`} className="text-sm text-error">
          {problem}
        </p>
      ) : null}
    </>
  );
}
