'use client';

import { useEffect, useState } from 'react';
import { clockTime } from '@/lib/document/clock-time';
import { ActionForm } from '@/components/ui/action-form';
import { Choice, Field } from '@/components/ui/field';

type Named = { id: string; name: string };
type Props = {
  code: string;
  cooldowns: Named[];
  devices: Named[];
  layouts: { key: string; name: string; about: string }[];
};

const localDate = () => new Intl.DateTimeFormat('en-CA', { dateStyle: 'short' }).format(new Date());

export function NewEntryForm({ code, cooldowns, devices, layouts }: Props) {
  // The writer's own day: the server's may be another around midnight.
  const [workDate, setWorkDate] = useState('');
  useEffect(() => setWorkDate(localDate()), []);
  // One key for this form, so that a second press after a lost answer makes no second leaf.
  const [requestKey] = useState(() => crypto.randomUUID());
  return (
    <ActionForm
      method="POST"
      url={`/api/notebooks/${code}/entries`}
      submit="Take the next leaf"
      className="mt-4 space-y-4"
      toBody={(form) => ({
        title: form.get('title'),
        workDate: form.get('workDate'),
        cooldownId: form.get('cooldown') || null,
        deviceIds: form.getAll('device'),
        layout: form.get('layout'),
        requestKey,
        writtenAt: clockTime(new Date()),
      })}
      done={(answer) => ({ go: `/entries/${String(answer.id)}` })}
    >
      <Field label="Title" name="title" required autoFocus maxLength={300} />
      <Field
        label="Date of the work"
        name="workDate"
        type="date"
        value={workDate}
        onChange={(event) => setWorkDate(event.target.value)}
        required
      />
      <Choice
        label="Cooldown"
        name="cooldown"
        options={[{ value: '', text: 'none' }, ...cooldowns.map(({ id, name }) => ({ value: id, text: name }))]}
        defaultValue={cooldowns[0]?.id ?? ''}
      />
      <fieldset>
        <legend className="font-medium">Devices</legend>
        {devices.length === 0 ? <p className="text-sm text-quiet">This notebook has no device yet.</p> : null}
        {devices.map((device) => (
          <label key={device.id} className="flex min-h-8 items-center gap-2">
            <input type="checkbox" name="device" value={device.id} /> {device.name}
          </label>
        ))}
      </fieldset>
      <Choice
        label="Layout"
        name="layout"
        options={layouts.map(({ key, name, about }) => ({ value: key, text: `${name}: ${about}` }))}
      />
    </ActionForm>
  );
}
