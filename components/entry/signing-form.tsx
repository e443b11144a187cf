'use client';

import { useEffect, useState, type FormEvent } from 'react';
import { request } from '@/components/hooks/request';
import { Field, LongField } from '@/components/ui/field';
import { AttentionSentence, ErrorSentence } from '@/components/ui/sentence';
import type { BindingDto, ChallengeDto } from '@/lib/schemas/signing';

type Props = {
  entryId: string;
  purpose: 'sign' | 'countersign';
  binding: BindingDto;
  witnesses?: { id: string; name: string }[];
};

/** Meaning, printed name, time with zone, the password again; signs what stands beside it and nothing else. */
export function SigningForm({ entryId, purpose, binding, witnesses = [] }: Props) {
  const [challenge, setChallenge] = useState<ChallengeDto | null>(null);
  const [problem, setProblem] = useState<string | null>(null);
  const [busy, setBusy] = useState(false);
  const [clock, setClock] = useState<{ text: string; zone: string } | null>(null);
  const base =
    purpose === 'sign' ? `/api/entries/${entryId}/challenge` : `/api/entries/${entryId}/countersignature/challenge`;

  useEffect(() => {
    const zone = Intl.DateTimeFormat().resolvedOptions().timeZone;
    let offset = 0;
    const tick = () =>
      setClock({
        zone,
        text: new Intl.DateTimeFormat('sv-SE', { dateStyle: 'short', timeStyle: 'medium' }).format(
          new Date(Date.now() + offset),
        ),
      });
    const timer = setInterval(tick, 1000);
    request<ChallengeDto>('POST', base, { versionDigest: binding.digest })
      .then((issued) => {
        offset = Date.parse(issued.serverTime) - Date.now();
        setChallenge(issued);
        tick();
      })
      .catch((error: unknown) => setProblem(error instanceof Error ? error.message : String(error)));
    return () => clearInterval(timer);
  }, [base, binding.digest]);

  const submit = async (event: FormEvent<HTMLFormElement>) => {
    event.preventDefault();
    if (!challenge || !clock) return;
    const form = new FormData(event.currentTarget);
    setBusy(true);
    setProblem(null);
    try {
      await request('POST', `/api/entries/${entryId}/${purpose === 'sign' ? 'signature' : 'countersignature'}`, {
        challengeId: challenge.challengeId,
        versionDigest: binding.digest,
        password: form.get('password'),
        zone: clock.zone,
        lateReason: String(form.get('lateReason') ?? '').trim() || null,
        witnessIds: form.getAll('witness'),
      });
      window.location.assign(`/entries/${entryId}`);
    } catch (error) {
      setProblem(error instanceof Error ? error.message : String(error));
      setBusy(false);
    }
  };

  return (
    <form onSubmit={submit} className="space-y-4 border-t-4 border-signed bg-sheet p-5">
      <p className="font-serif text-lg">“{binding.meaning}”</p>
      <p>
        <strong>{binding.printedName}</strong>
        <span className="figures block text-quiet">
          {clock ? `${clock.text} (${clock.zone})` : 'asking the server for the time …'}
        </span>
      </p>
      <p className="text-sm text-quiet">
        The statement is recorded with the server’s time and is marked “attested by the server”: it says that the server
        checked your password, not that a key of yours signed.
      </p>
      {binding.late ? (
        <>
          <AttentionSentence>
            The work was {binding.late.days} days ago; a signature after {binding.late.limit} days is marked late, with
            the reason.
          </AttentionSentence>
          <LongField label="Reason for signing late" name="lateReason" required />
        </>
      ) : null}
      {purpose === 'sign' ? (
        <fieldset>
          <legend className="font-medium">Ask to countersign</legend>
          {witnesses.length === 0 ? (
            <p className="text-sm text-quiet">Nobody in this notebook took no part and may countersign.</p>
          ) : null}
          {witnesses.map((witness) => (
            <label key={witness.id} className="flex min-h-8 items-center gap-2">
              <input type="checkbox" name="witness" value={witness.id} /> {witness.name}
            </label>
          ))}
        </fieldset>
      ) : null}
      <Field label="Your password, again" name="password" type="password" autoComplete="current-password" required />
      <ErrorSentence>{problem}</ErrorSentence>
      <button type="submit" className="press press-main" disabled={busy || !challenge}>
        {purpose === 'sign' ? 'Sign version' : 'Countersign version'} {binding.seq}
      </button>
    </form>
  );
}
