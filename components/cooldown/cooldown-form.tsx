'use client';

import { useState } from 'react';
import { ActionForm } from '@/components/ui/action-form';
import { Field, LongField } from '@/components/ui/field';
import { RowList } from '@/components/ui/row-list';
import type { CooldownDto } from '@/lib/schemas/laboratory';

type Line = CooldownDto['lines'][number];

/** A cooldown: made in the notebook `code`, or changed where `cooldown` is given. */
export function CooldownForm({
  code,
  devices,
  cooldown,
}: {
  code: string;
  devices: { id: string; name: string }[];
  cooldown?: CooldownDto;
}) {
  const [lines, setLines] = useState<Line[]>(cooldown?.lines ?? []);
  const body = (form: FormData) => ({
    ...Object.fromEntries(
      ['name', 'cryostat', 'startedOn', 'baseTemperature', 'remarks'].map((key) => [key, String(form.get(key) ?? '')]),
    ),
    endedOn: String(form.get('endedOn') ?? '') || null,
    deviceIds: form.getAll('device'),
    lines,
  });
  return (
    <ActionForm
      method={cooldown ? 'PUT' : 'POST'}
      url={cooldown ? `/api/cooldowns/${cooldown.id}` : `/api/notebooks/${code}/cooldowns`}
      submit="Store"
      className="mt-4 space-y-4"
      toBody={(form) => (cooldown ? { revision: cooldown.revision, cooldown: body(form) } : body(form))}
      done={(answer) => ({ go: `/cooldowns/${cooldown?.id ?? String(answer.id)}` })}
    >
      <div className="grid gap-4 sm:grid-cols-2">
        <Field label="Name" name="name" defaultValue={cooldown?.name} placeholder="Tern 24" required />
        <Field label="Cryostat" name="cryostat" defaultValue={cooldown?.cryostat} required />
        <Field label="Start" name="startedOn" type="date" defaultValue={cooldown?.startedOn} required />
        <Field
          label="End"
          name="endedOn"
          type="date"
          defaultValue={cooldown?.endedOn ?? ''}
          hint="Empty while it runs."
        />
        <Field
          label="Base temperature"
          name="baseTemperature"
          defaultValue={cooldown?.baseTemperature}
          hint="With its unit: 12 mK"
        />
      </div>
      <fieldset>
        <legend className="font-medium">Devices in it</legend>
        {devices.length === 0 ? <p className="text-sm text-quiet">This notebook has no device yet.</p> : null}
        {devices.map((device) => (
          <label key={device.id} className="flex min-h-8 items-center gap-2">
            <input
              type="checkbox"
              name="device"
              value={device.id}
              defaultChecked={cooldown?.devices.some((d) => d.id === device.id)}
            />{' '}
            {device.name}
          </label>
        ))}
      </fieldset>
      <RowList
        legend="Lines"
        rows={lines}
        onRows={setLines}
        blank={{ name: '', contact: '', attenuation: '', filter: '', biasTee: '', instrument: '' }}
        addText="Add a line"
        fields={[
          { key: 'name', title: 'Line' },
          { key: 'contact', title: 'Gate or contact' },
          { key: 'attenuation', title: 'Attenuation' },
          { key: 'filter', title: 'Filter' },
          { key: 'biasTee', title: 'Bias tee' },
          { key: 'instrument', title: 'Instrument' },
        ]}
      />
      <LongField label="Remarks" name="remarks" defaultValue={cooldown?.remarks} />
    </ActionForm>
  );
}
