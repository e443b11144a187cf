'use client';

import { useState } from 'react';
import { ActionForm } from '@/components/ui/action-form';
import { Field, LongField } from '@/components/ui/field';
import { RowList } from '@/components/ui/row-list';
import type { DeviceDto } from '@/lib/schemas/laboratory';

type GateText = { name: string; purpose: string; widthNm: string; lengthNm: string };

const toNumber = (text: string) => (text.trim() === '' ? null : Number(text));
const toText = (value: number | null) => (value === null ? '' : String(value));

/** A device: made in the notebook `code`, or changed where `device` is given. */
export function DeviceForm({ code, device }: { code: string; device?: DeviceDto }) {
  const [gates, setGates] = useState<GateText[]>(() =>
    (device?.gates ?? []).map((g) => ({
      name: g.name,
      purpose: g.purpose,
      widthNm: toText(g.widthNm),
      lengthNm: toText(g.lengthNm),
    })),
  );
  const body = (form: FormData) => ({
    ...Object.fromEntries(
      ['name', 'lot', 'wafer', 'die', 'material', 'dimensions', 'remarks'].map((key) => [
        key,
        String(form.get(key) ?? ''),
      ]),
    ),
    gates: gates.map((g) => ({
      name: g.name,
      purpose: g.purpose,
      widthNm: toNumber(g.widthNm),
      lengthNm: toNumber(g.lengthNm),
    })),
  });
  return (
    <ActionForm
      method={device ? 'PUT' : 'POST'}
      url={device ? `/api/devices/${device.id}` : `/api/notebooks/${code}/devices`}
      submit="Store"
      className="mt-4 space-y-4"
      toBody={(form) => (device ? { revision: device.revision, device: body(form) } : body(form))}
      done={(answer) => ({ go: `/devices/${device?.id ?? String(answer.id)}` })}
    >
      <div className="grid gap-4 sm:grid-cols-2">
        <Field label="Label of the device" name="name" defaultValue={device?.name} placeholder="GA1-B3" required />
        <Field label="Material" name="material" defaultValue={device?.material} />
        <Field label="Lot" name="lot" defaultValue={device?.lot} />
        <Field label="Wafer" name="wafer" defaultValue={device?.wafer} />
        <Field label="Die" name="die" defaultValue={device?.die} />
        <Field
          label="Dimensions"
          name="dimensions"
          defaultValue={device?.dimensions}
          hint="channel width, gate pitch, etch depth, with units"
        />
      </div>
      <RowList
        legend="Gates"
        rows={gates}
        onRows={setGates}
        blank={{ name: '', purpose: '', widthNm: '', lengthNm: '' }}
        addText="Add a gate"
        fields={[
          { key: 'name', title: 'Name' },
          { key: 'purpose', title: 'Purpose' },
          { key: 'widthNm', title: 'Width / nm', numeric: true },
          { key: 'lengthNm', title: 'Length / nm', numeric: true },
        ]}
      />
      <LongField label="Remarks" name="remarks" defaultValue={device?.remarks} />
    </ActionForm>
  );
}
