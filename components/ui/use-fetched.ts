'use client';

import { useEffect, useState } from 'react';

type Fetched<T> = { part: T | null; problem: string | null };

/**
 * A part of the page that is fetched when it is first wanted. By hand and not by React's lazy, which takes the whole page
 * down where the network is away: here the page stays, with a sentence, and the next time it is wanted it is fetched again.
 * `load` has to be the same function at every call.
 */
export function useFetched<T>(wanted: boolean, load: () => Promise<T>): Fetched<T> {
  const [state, setState] = useState<Fetched<T>>({ part: null, problem: null });
  const missing = state.part === null;
  useEffect(() => {
    if (!wanted || !missing) return;
    let gone = false;
    load().then(
      (part) => {
        if (!gone) setState({ part, problem: null });
      },
      () => {
        const problem =
          'This part of the page could not be fetched: the network is away. Nothing was lost; try again later.';
        if (!gone) setState({ part: null, problem });
      },
    );
    return () => {
      gone = true;
    };
  }, [wanted, missing, load]);
  return state;
}
