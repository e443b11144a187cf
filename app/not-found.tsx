import Link from 'next/link';

export default function NotFound() {
  return (
    <main className="mx-auto max-w-xl px-4 py-16">
      <h1>Nothing here</h1>
      <p className="my-4">
        There is nothing at this address, or it is not for you to see. Ask the lead of the notebook if you expected an
        entry.
      </p>
      <Link href="/" className="press">
        To Today
      </Link>
    </main>
  );
}
