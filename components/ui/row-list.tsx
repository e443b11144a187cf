'use client';

import { useState } from 'react';

export type RowField<Row> = { key: keyof Row & string; title: string; numeric?: boolean };

type Props<Row> = {
  legend: string;
  fields: RowField<Row>[];
  rows: Row[];
  onRows: (rows: Row[]) => void;
  blank: Row;
  addText: string;
};

/** A short list edited as a table, one input per cell: gates of a device, lines of a cooldown. */
export function RowList<Row extends Record<string, string>>({
  legend,
  fields,
  rows,
  onRows,
  blank,
  addText,
}: Props<Row>) {
  // Inputs keep their place when a row above is removed.
  const [keys, setKeys] = useState(() => rows.map(() => crypto.randomUUID()));
  const set = (index: number, key: string, value: string) =>
    onRows(rows.map((row, i) => (i === index ? { ...row, [key]: value } : row)));
  return (
    <fieldset>
      <legend className="font-medium">{legend}</legend>
      <div className="relative overflow-x-auto">
        {rows.map((row, index) => (
          <div
            key={keys[index] ?? index}
            className="my-2 flex flex-wrap items-end gap-2 border-t border-rule pt-2"
            role="group"
            aria-label={`${legend} ${index + 1}`}
          >
            {fields.map((field) => (
              <label key={field.key} className="min-w-28 grow basis-28">
                <span className="block text-sm text-quiet">{field.title}</span>
                <input
                  className="field"
                  inputMode={field.numeric ? 'decimal' : 'text'}
                  value={row[field.key]}
                  onChange={(event) => set(index, field.key, event.target.value)}
                />
              </label>
            ))}
            <button
              type="button"
              className="press"
              onClick={() => {
                onRows(rows.filter((_, i) => i !== index));
                setKeys(keys.filter((_, i) => i !== index));
              }}
            >
              Remove<span className="sr-only"> {row[fields[0].key]}</span>
            </button>
          </div>
        ))}
      </div>
      <button
        type="button"
        className="press mt-2"
        onClick={() => {
          onRows([...rows, blank]);
          setKeys([...keys, crypto.randomUUID()]);
        }}
      >
        {addText}
      </button>
    </fieldset>
  );
}
