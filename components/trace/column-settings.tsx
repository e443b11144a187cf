'use client';

import { Field } from '@/components/ui/field';
import type { StatedQuantity, TraceColumnSettings } from '@/lib/document/attributes';
import type { SettingsProblems } from './first-settings';

type Props = {
  index: number;
  column: TraceColumnSettings;
  problems: SettingsProblems;
  onChange: (column: TraceColumnSettings) => void;
};

/** One column: symbol and unit in view, gain and offset with where they come from on demand. */
export function ColumnSettings({ index, column, problems, onChange }: Props) {
  const at = (field: string) => problems[`columns.${index}.${field}`];
  const scaled = column.gain !== null || column.offset !== null;
  return (
    <li className="border-l-4 border-rule pl-3">
      <fieldset>
        <legend className="text-sm text-quiet">
          column {index + 1}: {column.name}
        </legend>
        <div className="grid gap-3 sm:grid-cols-2">
          <Field
            label="Symbol"
            className="field figures"
            maxLength={64}
            value={column.symbol}
            problem={at('symbol')}
            onChange={(event) => onChange({ ...column, symbol: event.target.value })}
          />
          <Field
            label="Unit"
            className="field figures"
            maxLength={60}
            placeholder="pA; 1 for a plain number"
            value={column.unit ?? ''}
            problem={at('unit')}
            onChange={(event) => onChange({ ...column, unit: event.target.value === '' ? null : event.target.value })}
          />
        </div>
        <details className="mt-1" open={scaled || undefined}>
          <summary className="min-h-[24px] cursor-pointer text-sm text-action">
            Gain and offset{scaled ? '' : ' (none: the file is in the quantity itself)'}
          </summary>
          <p className="text-sm text-quiet">quantity = (number in the file × unit − offset) / gain</p>
          <Stated
            label="Gain"
            placeholder="1e9 V/A ± 50 ppm"
            stated={column.gain}
            problem={at('gain')}
            onChange={(gain) => onChange({ ...column, gain })}
          />
          <Stated
            label="Offset"
            placeholder="0.12(3) mV"
            stated={column.offset}
            problem={at('offset')}
            onChange={(offset) => onChange({ ...column, offset })}
          />
        </details>
      </fieldset>
    </li>
  );
}

function Stated({
  label,
  placeholder,
  stated,
  problem,
  onChange,
}: {
  label: string;
  placeholder: string;
  stated: StatedQuantity | null;
  problem?: string;
  onChange: (stated: StatedQuantity | null) => void;
}) {
  const change = (part: Partial<StatedQuantity>) => {
    const next = { text: '', source: '', ...stated, ...part };
    onChange(next.text === '' && next.source === '' ? null : next);
  };
  return (
    <div className="grid gap-3 sm:grid-cols-2">
      <Field
        label={label}
        className="field figures"
        placeholder={placeholder}
        maxLength={200}
        value={stated?.text ?? ''}
        problem={problem}
        onChange={(event) => change({ text: event.target.value })}
      />
      <Field
        label={`${label}: where from`}
        placeholder="certificate CAL-0181"
        maxLength={300}
        value={stated?.source ?? ''}
        problem={
          stated && stated.text !== '' && stated.source.trim() === '' ? 'Say where this number comes from.' : null
        }
        onChange={(event) => change({ source: event.target.value })}
      />
    </div>
  );
}
