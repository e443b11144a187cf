'use client';

export default function PageError({ reset }: { error: Error; reset: () => void }) {
  return (
    <main className="mx-auto max-w-xl px-4 py-16">
      <h1>This page could not be made</h1>
      <p className="my-4">The server has noted what happened. Text that you typed is kept in this browser.</p>
      <button type="button" className="press" onClick={reset}>
        Try again
      </button>
    </main>
  );
}
