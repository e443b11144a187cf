'use client';

import { useState } from 'react';
import { request } from '@/components/hooks/request';
import { ActionForm } from '@/components/ui/action-form';
import { Field } from '@/components/ui/field';
import { ErrorSentence } from '@/components/ui/sentence';

type Line = { id: string; label: string; note: string; current?: boolean };

function EndableList({
  lines,
  url,
  verb,
  empty,
}: {
  lines: Line[];
  url: (id: string) => string;
  verb: string;
  empty: string;
}) {
  const [shown, setShown] = useState(lines);
  const [problem, setProblem] = useState<string | null>(null);
  const end = async (id: string) => {
    try {
      await request('DELETE', url(id));
      setShown(shown.filter((line) => line.id !== id));
    } catch (error) {
      setProblem(error instanceof Error ? error.message : String(error));
    }
  };
  if (shown.length === 0) return <p className="text-quiet">{empty}</p>;
  return (
    <>
      <ErrorSentence>{problem}</ErrorSentence>
      <ul>
        {shown.map((line) => (
          <li key={line.id} className="flex flex-wrap items-center justify-between gap-2 border-t border-rule py-2">
            <span className="min-w-0 break-words">
              {line.label} <span className="figures block text-sm text-quiet">{line.note}</span>
            </span>
            {line.current ? (
              <span className="text-signed">this one</span>
            ) : (
              <button type="button" className="press" onClick={() => void end(line.id)}>
                {verb}
                <span className="sr-only"> {line.label}</span>
              </button>
            )}
          </li>
        ))}
      </ul>
    </>
  );
}

export function Sessions({
  sessions,
}: {
  sessions: { id: string; startedAt: string; userAgent: string; current: boolean }[];
}) {
  const lines = sessions.map((s) => ({
    id: s.id,
    label: s.userAgent || 'unknown browser',
    note: `since ${s.startedAt.slice(0, 16).replace('T', ' ')} UTC`,
    current: s.current,
  }));
  return <EndableList lines={lines} url={(id) => `/api/account/sessions/${id}`} verb="End" empty="No session." />;
}

export function Tokens({
  tokens,
}: {
  tokens: { id: string; label: string; createdAt: string; lastUsedAt: string | null }[];
}) {
  const [secret, setSecret] = useState<string | null>(null);
  const lines = tokens.map((t) => ({
    id: t.id,
    label: t.label,
    note: `made ${t.createdAt.slice(0, 10)}, ${t.lastUsedAt ? `last used ${t.lastUsedAt.slice(0, 10)}` : 'not used yet'}`,
  }));
  return (
    <div className="max-w-xl">
      <p className="mb-3 text-quiet">A token has your rights to read and to attach, and never signs.</p>
      <EndableList lines={lines} url={(id) => `/api/account/tokens/${id}`} verb="Revoke" empty="No token." />
      <ActionForm
        method="POST"
        url="/api/account/tokens"
        submit="Make a token"
        reset
        className="mt-4 space-y-4"
        done={(answer) => {
          setSecret(String(answer.secret));
          return 'Made. It is shown once; keep it where the program reads it.';
        }}
      >
        <Field label="What for" name="label" required />
      </ActionForm>
      {secret ? <code className="mt-3 block break-all bg-tint p-3">{secret}</code> : null}
    </div>
  );
}
