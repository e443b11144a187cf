'use client';

import { useId } from 'react';
import { Choice, Field } from '@/components/ui/field';
import type { TraceSettings } from '@/lib/document/attributes';
import { ColumnSettings } from './column-settings';
import type { SettingsProblems } from './first-settings';
import {
  driveLabels,
  instrumentLabels,
  scanAsks,
  scanNames,
  type DriveField,
  type InstrumentField,
  type ScanKind,
} from './scan-kinds';

type Props = {
  settings: TraceSettings;
  onChange: (settings: TraceSettings) => void;
  /** Sentences by place, as `settingsProblems` gives them; the caller may add its own. */
  problems: SettingsProblems;
};

const orNull = (text: string) => (text === '' ? null : text);
const driveFields = Object.keys(driveLabels) as DriveField[];
const instrumentFields = Object.keys(instrumentLabels) as InstrumentField[];

/** What the author says of a trace: units, gains, sign, scan, drive and instrument. Controlled; nothing is filled in by itself. */
export function TraceSettingsForm({ settings, onChange, problems }: Props) {
  const titles = useId();
  const asks = settings.scanKind ? scanAsks[settings.scanKind] : null;
  const asked = (field: DriveField) => asks?.drive.includes(field) ?? false;
  const askedOf = (field: InstrumentField) => asks?.instrument.includes(field) ?? false;
  const drive = (field: DriveField) => (
    <Field
      key={field}
      label={driveLabels[field].label}
      placeholder={driveLabels[field].placeholder}
      maxLength={200}
      value={settings.drive[field] ?? ''}
      problem={problems[`drive.${field}`]}
      onChange={(event) => onChange({ ...settings, drive: { ...settings.drive, [field]: orNull(event.target.value) } })}
    />
  );
  const instrument = (field: InstrumentField) => (
    <Field
      key={field}
      label={instrumentLabels[field].label}
      placeholder={instrumentLabels[field].placeholder}
      maxLength={200}
      value={settings.instrument[field] ?? ''}
      problem={problems[`instrument.${field}`]}
      onChange={(event) =>
        onChange({ ...settings, instrument: { ...settings.instrument, [field]: orNull(event.target.value) } })
      }
    />
  );
  const sweep = (
    <Choice
      label="Sweep direction"
      value={settings.sweepDirection ?? ''}
      options={[{ value: '', text: 'not stated' }, 'up', 'down', { value: 'both', text: 'up and down' }]}
      onChange={(event) =>
        onChange({
          ...settings,
          sweepDirection: (orNull(event.target.value) as TraceSettings['sweepDirection']) ?? null,
        })
      }
    />
  );
  return (
    <div className="space-y-5">
      <section aria-labelledby={`${titles}-columns`}>
        <h3 id={`${titles}-columns`} className="font-semibold">
          Columns
        </h3>
        <ol className="space-y-3">
          {settings.columns.map((column, i) => (
            <ColumnSettings
              key={i}
              index={i}
              column={column}
              problems={problems}
              onChange={(next) =>
                onChange({ ...settings, columns: settings.columns.map((other, j) => (j === i ? next : other)) })
              }
            />
          ))}
        </ol>
      </section>
      <section aria-labelledby={`${titles}-scan`} className="space-y-3">
        <h3 id={`${titles}-scan`} className="font-semibold">
          Scan
        </h3>
        <Choice
          label="What was measured"
          value={settings.scanKind ?? ''}
          options={[
            { value: '', text: 'not stated' },
            ...Object.entries(scanNames).map(([value, text]) => ({ value, text })),
          ]}
          hint={asks?.hint}
          onChange={(event) => onChange({ ...settings, scanKind: orNull(event.target.value) as ScanKind | null })}
        />
        <div className="grid gap-3 sm:grid-cols-2">
          <Choice
            label="Sign of the current"
            value={settings.sign ?? ''}
            options={[
              { value: '', text: 'not stated' },
              'as recorded',
              { value: 'reversed', text: 'reversed: the recorded sign is turned' },
            ]}
            onChange={(event) => onChange({ ...settings, sign: orNull(event.target.value) as TraceSettings['sign'] })}
          />
          <Field
            label="A positive current means"
            placeholder="electrons from source to drain"
            maxLength={200}
            value={settings.signConvention ?? ''}
            onChange={(event) => onChange({ ...settings, signConvention: orNull(event.target.value) })}
          />
          {driveFields.filter(asked).map(drive)}
          {instrumentFields.filter(askedOf).map(instrument)}
          {asks?.sweep ? sweep : null}
        </div>
        <details>
          <summary className="min-h-[24px] cursor-pointer text-action">
            {asks ? 'Everything else about drive and instrument' : 'Drive and instrument'}
          </summary>
          <div className="mt-2 grid gap-3 sm:grid-cols-2">
            {driveFields.filter((field) => !asked(field)).map(drive)}
            {instrumentFields.filter((field) => !askedOf(field)).map(instrument)}
            {asks?.sweep ? null : sweep}
          </div>
        </details>
      </section>
    </div>
  );
}
