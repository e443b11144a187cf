'use client';

import { useState } from 'react';
import { request } from '@/components/hooks/request';
import { ErrorSentence } from '@/components/ui/sentence';

/** Cuts a version of the newest draft and shows the page anew. */
export function CutVersion({ entryId, revision }: { entryId: string; revision: number }) {
  const [problem, setProblem] = useState<string | null>(null);
  const cut = async () => {
    try {
      await request('POST', `/api/entries/${entryId}/versions`, { basedOn: revision, reason: null });
      window.location.reload();
    } catch (error) {
      setProblem(error instanceof Error ? error.message : String(error));
    }
  };
  return (
    <>
      <button type="button" className="press press-main" onClick={() => void cut()}>
        Cut a version of the newest text
      </button>
      <ErrorSentence>{problem}</ErrorSentence>
    </>
  );
}
