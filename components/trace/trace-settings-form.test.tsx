import { cleanup, render, screen } from '@testing-library/react';
import userEvent from '@testing-library/user-event';
import { useState } from 'react';
import { afterEach, expect, it } from 'vitest';
import { traceSettingsSchema, type TraceSettings } from '@/lib/document/attributes';
import { firstSettings, settingsProblems } from './first-settings';
import { TraceSettingsForm } from './trace-settings-form';

afterEach(cleanup);

function Trial({ onSettings }: { onSettings: (settings: TraceSettings) => void }) {
  const [settings, setSettings] = useState(() =>
    firstSettings([
      { name: 'Time', symbol: 'Time', unit: null },
      { name: 'I', symbol: 'I', unit: 'furlong' },
    ]),
  );
  const change = (next: TraceSettings) => {
    setSettings(next);
    onSettings(next);
  };
  return <TraceSettingsForm settings={settings} onChange={change} problems={settingsProblems(settings)} />;
}

it('asks for a unit that is not stated, names one that nobody knows, and keeps what is typed', async () => {
  const person = userEvent.setup();
  let last: TraceSettings | null = null;
  render(<Trial onSettings={(settings) => (last = settings)} />);
  expect(screen.getByText('unit not stated')).toBeTruthy();
  expect(screen.getByText(/furlong/)).toBeTruthy();
  const [time] = screen.getAllByLabelText('Unit');
  expect(time.getAttribute('aria-invalid')).toBe('true');
  await person.type(time, 's');
  expect(screen.queryByText('unit not stated')).toBeNull();
  await person.selectOptions(screen.getByLabelText('What was measured'), 'waiting-time');
  await person.type(screen.getByLabelText('Waiting time'), '2 µs');
  await person.type(screen.getAllByLabelText('Gain')[1], '1e9 V/A');
  expect(screen.getByText('Say where this number comes from.')).toBeTruthy();
  expect(last).toMatchObject({
    scanKind: 'waiting-time',
    drive: { wait: '2 µs' },
    columns: [{ unit: 's' }, { gain: { text: '1e9 V/A', source: '' } }],
  });
  expect(() => traceSettingsSchema.parse(last)).not.toThrow();
});

it('refuses two columns of one symbol', () => {
  const settings = firstSettings([
    { name: 'a', symbol: 'I', unit: 'pA' },
    { name: 'b', symbol: 'I', unit: 'pA' },
  ]);
  expect(settingsProblems(settings)['columns.1.symbol']).toContain('column 1');
});
