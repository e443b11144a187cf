'use client';

import Link from 'next/link';
import { ActionForm } from '@/components/ui/action-form';
import { Field, LongField } from '@/components/ui/field';
import { AttentionSentence } from '@/components/ui/sentence';
import type { EntryDto } from '@/lib/schemas/entry';

export type EntryChoices = {
  cooldowns: { id: string; name: string }[];
  devices: { id: string; name: string }[];
  colleagues: { id: string; name: string }[];
};

/** What can be done with an entry as a whole: its facts, writing together, layout, history, striking out. */
export function EntryActions({
  entry,
  choices,
  lead,
}: {
  entry: EntryDto;
  choices: EntryChoices | null;
  lead: boolean;
}) {
  return (
    <div className="mb-3 flex flex-wrap items-center gap-2">
      <Link href={`/notebooks/${entry.notebook.code}`} className="mr-auto">
        {entry.notebook.code} {entry.notebook.title}
      </Link>
      {choices ? <FactsPanel entry={entry} choices={choices} /> : null}
      {entry.may.invite && choices ? <InvitePanel entry={entry} colleagues={choices.colleagues} /> : null}
      {lead ? <LayoutPanel entry={entry} /> : null}
      {entry.may.strikeOut ? <StrikePanel entry={entry} /> : null}
      <Link href={`/entries/${entry.id}/versions`} className="press">
        Versions
      </Link>
      {entry.struckReason ? (
        <div className="w-full">
          <AttentionSentence>Struck out: {entry.struckReason}</AttentionSentence>
        </div>
      ) : null}
    </div>
  );
}

function Panel({ title, children }: { title: string; children: React.ReactNode }) {
  return (
    <details className="relative">
      <summary className="press cursor-pointer list-none">{title}</summary>
      <div className="fixed inset-x-3 z-20 mt-1 max-h-[75vh] overflow-auto border border-edge bg-sheet p-4 sm:absolute sm:inset-x-auto sm:right-0 sm:w-96">
        {children}
      </div>
    </details>
  );
}

function FactsPanel({ entry, choices }: { entry: EntryDto; choices: EntryChoices }) {
  return (
    <Panel title="Date and device">
      <ActionForm
        method="PUT"
        url={`/api/entries/${entry.id}`}
        submit="Store"
        toBody={(form) => ({
          workDate: form.get('workDate'),
          cooldownId: form.get('cooldown') || null,
          deviceIds: form.getAll('device'),
        })}
        done={() => ({ go: `/entries/${entry.id}` })}
      >
        <Field label="Date of the work" name="workDate" type="date" defaultValue={entry.workDate} required />
        <label className="block">
          <span className="font-medium">Cooldown</span>
          <select className="field" name="cooldown" defaultValue={entry.cooldown?.id ?? ''}>
            <option value="">none</option>
            {choices.cooldowns.map((cooldown) => (
              <option key={cooldown.id} value={cooldown.id}>
                {cooldown.name}
              </option>
            ))}
          </select>
        </label>
        <fieldset>
          <legend className="font-medium">Devices</legend>
          {choices.devices.map((device) => (
            <label key={device.id} className="flex min-h-8 items-center gap-2">
              <input
                type="checkbox"
                name="device"
                value={device.id}
                defaultChecked={entry.devices.some((d) => d.id === device.id)}
              />{' '}
              {device.name}
            </label>
          ))}
        </fieldset>
      </ActionForm>
    </Panel>
  );
}

function InvitePanel({ entry, colleagues }: { entry: EntryDto; colleagues: EntryChoices['colleagues'] }) {
  const open = colleagues.filter(
    (person) => person.id !== entry.author.id && !entry.contributors.some((c) => c.id === person.id),
  );
  return (
    <Panel title="Write together">
      {entry.contributors.length > 0 ? (
        <p className="mb-2">Invited: {entry.contributors.map((c) => c.name).join(', ')}</p>
      ) : null}
      {open.length === 0 ? (
        <p className="text-quiet">Nobody else of this notebook writes entries.</p>
      ) : (
        <ActionForm
          method="POST"
          url={`/api/entries/${entry.id}/contributors`}
          submit="Invite"
          toBody={(form) => ({ userId: form.get('userId') })}
          done={() => ({ go: `/entries/${entry.id}` })}
        >
          <label className="block">
            <span className="font-medium">Colleague</span>
            <select className="field" name="userId">
              {open.map((person) => (
                <option key={person.id} value={person.id}>
                  {person.name}
                </option>
              ))}
            </select>
          </label>
          <p className="text-sm text-quiet">Whoever is invited can no longer be the witness of this entry.</p>
        </ActionForm>
      )}
    </Panel>
  );
}

function LayoutPanel({ entry }: { entry: EntryDto }) {
  return (
    <Panel title="Save layout">
      <ActionForm
        method="POST"
        url={`/api/notebooks/${entry.notebook.code}/layouts`}
        submit="Save the structure"
        reset
        toBody={(form) => ({ entryId: entry.id, name: form.get('name') })}
        done={() => 'Saved; it is offered with new entries of this notebook.'}
      >
        <Field
          label="Name of the layout"
          name="name"
          required
          hint="Headings, empty tables and unticked lists are kept; text, traces and values are not."
        />
      </ActionForm>
    </Panel>
  );
}

function StrikePanel({ entry }: { entry: EntryDto }) {
  return (
    <Panel title="Strike out">
      <p className="mb-2">
        Leaf <span className="figures">{entry.leaf}</span>, “{entry.title}”. The leaf number stays used and the text
        readable; it cannot be taken back.
      </p>
      <ActionForm
        method="POST"
        url={`/api/entries/${entry.id}/strike`}
        submit={`Strike out leaf ${entry.leaf}`}
        done={() => ({ go: `/entries/${entry.id}` })}
      >
        <LongField label="Reason" name="reason" required />
      </ActionForm>
    </Panel>
  );
}
