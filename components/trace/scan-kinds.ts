import type { TraceSettings } from '@/lib/document/attributes';

/** What matters to each kind of scan: these are asked for first, the rest can be opened. */

export type DriveField = keyof TraceSettings['drive'];
export type InstrumentField = keyof TraceSettings['instrument'];
export type ScanKind = NonNullable<TraceSettings['scanKind']>;

export const scanNames: Record<ScanKind, string> = {
  'on-off': 'current with the drive on and off',
  'waiting-time': 'escape against waiting time',
  staircase: 'current plateaus against a gate voltage',
  stability: 'one setting over a long time',
  map: 'map over two gate voltages',
  other: 'another kind',
};

export const scanAsks: Record<
  ScanKind,
  { drive: DriveField[]; instrument: InstrumentField[]; sweep: boolean; hint: string }
> = {
  'on-off': {
    drive: ['frequency', 'waveform', 'amplitude'],
    instrument: ['range', 'integrationTime'],
    sweep: false,
    hint: 'Name the spans with the drive on and off on the plot; their difference needs the frequency.',
  },
  'waiting-time': {
    drive: ['frequency', 'load', 'wait', 'eject'],
    instrument: ['range', 'bandwidth'],
    sweep: false,
    hint: 'The waiting time counts from the end of the edge that opens the wait. Load, wait and eject must fit into one period.',
  },
  staircase: {
    drive: ['frequency', 'waveform', 'amplitude'],
    instrument: ['range', 'integrationTime'],
    sweep: true,
    hint: 'State the direction of the sweep: plateaus may lie elsewhere on the way back.',
  },
  stability: {
    drive: ['frequency', 'amplitude'],
    instrument: ['range', 'bandwidth', 'integrationTime'],
    sweep: false,
    hint: 'Range and bandwidth decide the noise; state them as they were set.',
  },
  map: {
    drive: ['frequency', 'amplitude'],
    instrument: ['range', 'integrationTime'],
    sweep: true,
    hint: 'State in which direction the fast axis was swept.',
  },
  other: { drive: [], instrument: [], sweep: false, hint: 'State what a colleague needs to read this trace.' },
};

export const driveLabels: Record<DriveField, { label: string; placeholder: string }> = {
  frequency: { label: 'Drive frequency', placeholder: '200 kHz exactly' },
  waveform: { label: 'Waveform', placeholder: 'sine' },
  amplitude: { label: 'Amplitude at the source', placeholder: '12 dBm' },
  load: { label: 'Load time', placeholder: '1 µs' },
  wait: { label: 'Waiting time', placeholder: '2 µs' },
  eject: { label: 'Eject time', placeholder: '1 µs' },
};

export const instrumentLabels: Record<InstrumentField, { label: string; placeholder: string }> = {
  name: { label: 'Instrument', placeholder: 'current amplifier on ohmic 2' },
  range: { label: 'Range', placeholder: '1 nA' },
  bandwidth: { label: 'Bandwidth', placeholder: '10 Hz' },
  integrationTime: { label: 'Integration time', placeholder: '20 ms' },
  overload: { label: 'Overload', placeholder: 'none seen' },
};
