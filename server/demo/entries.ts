import 'server-only';
import type { NodeJson } from '@/lib/document/json';
import type { TraceDto } from '@/lib/schemas/entry';
import type { Person } from '@/server/access/person';
import { caution, checks, equationBlock, heading, logLine, paragraph, table, traceBlock } from './document';
import { onOffRun, stabilityRun, staircaseScan, waitingTimeScan, type TraceFile } from './generator';
import type { DemoPlaces, Who } from './people';

type Writing = { author: Person; begun: Date; trace: (fileName: string) => TraceDto };

export type DemoEntry = {
  book: keyof DemoPlaces['books'];
  author: Who;
  daysAgo: number;
  title: string;
  cooldown: keyof DemoPlaces['cooldowns'];
  devices: (keyof DemoPlaces['devices'])[];
  traces: TraceFile[];
  write: (writing: Writing) => NodeJson[];
  /** `fresh` has no version yet. */
  state: 'fresh' | 'draft' | 'signed' | 'witnessed' | 'struck out';
  witness?: Who;
  signedAfterDays?: number;
  lateReason?: string;
  strikeReason?: string;
  question?: { text: string; answer: string | null };
};

const minutesLater = (time: Date, minutes: number) => new Date(time.getTime() + minutes * 60_000);

const driveAt200 = {
  scanKind: 'on-off' as const,
  drive: { frequency: '200 kHz', waveform: 'square', amplitude: '180 mV', load: '1 us', wait: '2 us', eject: '1 us' },
  instrument: {
    name: 'current amplifier CAL-0181',
    range: '100 fA',
    bandwidth: '30 Hz',
    integrationTime: '5 ms',
    overload: 'none',
  },
};

/** One working point of GA1-B3 at 200 kHz: an on-off run and the escape probability from it. */
function workingPoint(
  at: { daysAgo: number; title: string; escape: number; seed: number; state: DemoEntry['state'] } & Partial<DemoEntry>,
): DemoEntry {
  const file = `on-off-${String(at.seed).padStart(4, '0')}.csv`;
  const { daysAgo, title, escape, seed, state, ...rest } = at;
  return {
    book: 'escape',
    author: 'tomas',
    cooldown: 'tern24',
    devices: ['ga'],
    daysAgo,
    title,
    state,
    traces: [onOffRun({ name: file, seed, frequencyHz: 200e3, escape, offsetFa: 0.21, noiseFa: 0.9 })],
    write: ({ author, begun, trace }) => [
      caution(author.name, begun),
      heading('Aim'),
      paragraph('Escape probability at one exit-gate voltage, from an on-off run.'),
      heading('State of the cryostat'),
      table([
        ['quantity', 'value'],
        ['bath', '4.21 K'],
        ['level', '61 %'],
        ['helium pressure', '1003 mbar'],
      ]),
      heading('Safety checks'),
      checks(['Oxygen monitor on', 'Relief valve free of ice']),
      heading('Log'),
      logLine(minutesLater(begun, 72), 'Ammeter offset taken with the drive off; gain from certificate CAL-0181.'),
      logLine(minutesLater(begun, 89), 'Drive on, exit gate at −620 mV.'),
      heading('Measurements'),
      traceBlock(trace(file), {
        handle: 't1',
        x: 't',
        y: ['I'],
        spans: [
          {
            name: 'on',
            axis: 't',
            intervals: [
              [16, 44],
              [76, 104],
            ],
          },
          { name: 'off', axis: 't', intervals: [[50, 72]] },
        ],
        settings: driveAt200,
      }),
      heading('Results'),
      paragraph(
        'Drive at {f = 200 kHz exactly}. With the drive on {I_on = mean(t1.I, on)}, off {I_off = mean(t1.I, off)}, so that',
      ),
      paragraph('{P_esc = (I_on - I_off)/(e*f)} by $P_\\mathrm{esc} = (I_\\mathrm{on} - I_\\mathrm{off})/(e f)$.'),
      paragraph('Charge per cycle, offset included: {n = I_on/(e*f)}.'),
      heading('What next'),
      paragraph('Waiting-time scans at neighbouring exit voltages.'),
    ],
    ...rest,
  };
}

/** Waiting-time scans at several exit voltages; the derived column P is plotted against t_wait. */
function waitingScans(
  daysAgo: number,
  title: string,
  scans: { exitMv: number; tauUs: number; seed: number }[],
  rest: Partial<DemoEntry> & { state: DemoEntry['state'] },
): DemoEntry {
  const fileOf = (exitMv: number) => `wait-scan-${Math.abs(exitMv)}mV.csv`;
  return {
    book: 'escape',
    author: 'tomas',
    cooldown: 'tern24',
    devices: ['ga'],
    daysAgo,
    title,
    traces: [
      onOffRun({
        name: 'offset-run.csv',
        seed: 900 + daysAgo,
        frequencyHz: 200e3,
        escape: 1,
        offsetFa: 0.18,
        noiseFa: 0.9,
        rows: 6000,
      }),
      ...scans.map((scan) =>
        waitingTimeScan({
          name: fileOf(scan.exitMv),
          seed: scan.seed,
          frequencyHz: 200e3,
          tauUs: scan.tauUs,
          exitMv: scan.exitMv,
          offsetFa: 0.18,
          noiseFa: 0.25,
        }),
      ),
    ],
    write: ({ author, begun, trace }) => [
      caution(author.name, begun),
      heading('Aim'),
      paragraph(
        'Escape against waiting time at several exit-gate voltages; 5 µs a cycle, the wait counted from the end of the opening edge.',
      ),
      equationBlock('P_\\mathrm{esc}(t) = 1 - S_0\\,\\mathrm{e}^{-t/\\tau}'),
      heading('Log'),
      logLine(minutesLater(begun, 40), 'Bath at 4.20 K, level 58 %.'),
      logLine(minutesLater(begun, 55), 'Offset run, then the scans from the lowest barrier up.'),
      heading('Measurements'),
      paragraph('Drive at {f = 200 kHz exactly}.'),
      traceBlock(trace('offset-run.csv'), {
        handle: 't1',
        x: 't',
        y: ['I'],
        spans: [{ name: 'off', axis: 't', intervals: [[50, 72]] }],
        settings: driveAt200,
      }),
      paragraph('Offset {I_off = mean(t1.I, off)}.'),
      ...scans.flatMap((scan, index) => {
        const handle = `t${index + 2}`;
        return [
          traceBlock(trace(fileOf(scan.exitMv)), {
            handle,
            x: 't_wait',
            y: ['P'],
            spans: [{ name: 'late', axis: 't_wait', intervals: [[3.5, 4.4]] }],
            settings: {
              scanKind: 'waiting-time',
              drive: {
                frequency: '200 kHz',
                waveform: 'square',
                amplitude: '180 mV',
                load: '0.3 us',
                wait: '4.3 us',
                eject: '0.3 us',
              },
              sweepDirection: 'up',
            },
          }),
          paragraph(
            `Exit gate at ${scan.exitMv} mV: {${handle}.P = (${handle}.I - I_off)/(e*f)}, late in the wait {P_${index + 2} = mean(${handle}.P, late)}.`,
          ),
        ];
      }),
      heading('Results'),
      paragraph('The escape slows as the barrier rises, as it should.'),
    ],
    ...rest,
  };
}

function staircase(
  daysAgo: number,
  title: string,
  seed: number,
  rest: Partial<DemoEntry> & { state: DemoEntry['state'] },
): DemoEntry {
  return {
    book: 'pumps',
    author: 'tomas',
    cooldown: 'brine12',
    devices: ['c7'],
    daysAgo,
    title,
    traces: [staircaseScan({ name: `staircase-${seed}.csv`, seed, frequencyHz: 100e6, noisePa: 0.012, delta: 18 })],
    write: ({ author, begun, trace }) => [
      caution(author.name, begun),
      heading('Aim'),
      paragraph('Current plateaus against the exit gate at 100 MHz.'),
      heading('Log'),
      logLine(minutesLater(begun, 30), 'Mixing chamber at 12 mK, drive at −4 dBm at the generator.'),
      heading('Measurements'),
      traceBlock(trace(`staircase-${seed}.csv`), {
        handle: 't1',
        x: 'V_exit',
        y: ['I'],
        spans: [{ name: 'first', axis: 'V_exit', intervals: [[-358, -351]] }],
        settings: {
          scanKind: 'staircase',
          sweepDirection: 'up',
          drive: { frequency: '100 MHz', waveform: 'sine', amplitude: '240 mV', load: null, wait: null, eject: null },
        },
      }),
      heading('Results'),
      paragraph(
        'At {f = 100 MHz exactly} one electron per cycle is {I_1 = e*f}. On the first plateau {I = mean(t1.I, first)}, thus {n = I/(e*f)} and a slope of {s = slope(t1.I, first)}.',
      ),
      paragraph('Axis in electrons per cycle: {t1.n = t1.I/(e*f)}.'),
    ],
    ...rest,
  };
}

function stability(
  daysAgo: number,
  title: string,
  seed: number,
  rest: Partial<DemoEntry> & { state: DemoEntry['state'] },
): DemoEntry {
  return {
    book: 'pumps',
    author: 'tomas',
    cooldown: 'brine12',
    devices: ['d2'],
    daysAgo,
    title,
    traces: [
      stabilityRun({
        name: `stability-${seed}.tsv`,
        seed,
        rows: 120_000,
        currentPa: 16.0217,
        noisePa: 0.02,
        driftPaPerHour: 0.0008,
      }),
    ],
    write: ({ author, begun, trace }) => [
      caution(author.name, begun),
      heading('Aim'),
      paragraph('Plateau current of SK4-D2 at 100 MHz over three hours.'),
      heading('Measurements'),
      traceBlock(trace(`stability-${seed}.tsv`), {
        handle: 't1',
        x: 't',
        y: ['I'],
        spans: [{ name: 'all', axis: 't', intervals: [[0, 12000]] }],
        settings: {
          scanKind: 'stability',
          drive: { frequency: '100 MHz', waveform: 'sine', amplitude: '240 mV', load: null, wait: null, eject: null },
        },
      }),
      heading('Results'),
      paragraph(
        '{f = 100 MHz exactly}; mean {I = mean(t1.I, all)}, scatter of one sample {s_I = sd(t1.I, all)}, {n = I/(e*f)}.',
      ),
    ],
    ...rest,
  };
}

function note(
  daysAgo: number,
  title: string,
  words: string[],
  rest: Partial<DemoEntry> & { state: DemoEntry['state'] },
): DemoEntry {
  return {
    book: 'pumps',
    author: 'tomas',
    cooldown: 'brine11',
    devices: ['c7'],
    daysAgo,
    title,
    traces: [],
    write: ({ author, begun }) => [
      caution(author.name, begun),
      heading('Log'),
      ...words.map((word, index) => logLine(minutesLater(begun, 20 + 25 * index), word)),
    ],
    ...rest,
  };
}

/** Some twenty entries in every state, over several weeks. */
export function demoEntries(): DemoEntry[] {
  return [
    note(
      44,
      'Brine 11: loading and first cool-down',
      ['SK4-C7 bonded and mounted.', 'Leak rate within the laboratory’s limit; pump-down begun.', 'Compressor on.'],
      { state: 'witnessed' },
    ),
    note(
      43,
      'Brine 11: wiring check at 4 K',
      ['All lines conduct; left gate 12 GΩ to ground.', 'Bias tee of RF 2 in place.'],
      { state: 'witnessed' },
    ),
    staircase(41, 'First plateaus of SK4-C7', 41, { cooldown: 'brine11', state: 'witnessed' }),
    note(40, 'Brine 11: duplicate of leaf 3', ['Begun on the other computer by mistake.'], {
      state: 'struck out',
      strikeReason: 'Begun twice; the work is on leaf 3.',
    }),
    staircase(38, 'Plateaus of SK4-C7 at lower drive', 38, {
      cooldown: 'brine11',
      state: 'witnessed',
      question: {
        text: 'Which attenuator stood in RF 2 on this day?',
        answer: '23 dB, as in the line table of Brine 11.',
      },
    }),
    note(31, 'Brine 11: warm-up for the leak test', ['Mixture recovered.', 'Still heater off; warm-up begun.'], {
      state: 'signed',
      signedAfterDays: 6,
      lateReason: 'The computer of the hall was away for repair; the times are from the paper slip.',
    }),
    note(19, 'Tern 24: filling', ['Helium transfer finished at 63 %.', 'Gate leakage below 1 pA.'], {
      book: 'escape',
      cooldown: 'tern24',
      devices: ['ga'],
      state: 'witnessed',
    }),
    workingPoint({
      daysAgo: 17,
      title: 'Escape over the exit barrier, first working point',
      escape: 0.71,
      seed: 17,
      state: 'witnessed',
    }),
    workingPoint({
      daysAgo: 15,
      title: 'Escape over the exit barrier, day one',
      escape: 0.84,
      seed: 15,
      state: 'witnessed',
      author: 'ines',
    }),
    note(15, 'Brine 12: loading', ['SK4-C7 and SK4-D2 mounted.', 'Cool-down begun.'], {
      cooldown: 'brine12',
      devices: ['c7', 'd2'],
      state: 'witnessed',
    }),
    waitingScans(
      13,
      'Waiting-time scans at three exit voltages',
      [
        { exitMv: -612, tauUs: 0.52, seed: 612 },
        { exitMv: -618, tauUs: 0.92, seed: 618 },
        { exitMv: -624, tauUs: 1.6, seed: 624 },
      ],
      { state: 'witnessed' },
    ),
    staircase(12, 'Plateaus of SK4-C7 in Brine 12', 12, { state: 'signed' }),
    stability(10, 'Plateau current of SK4-D2 overnight', 10, { state: 'witnessed' }),
    waitingScans(
      8,
      'Waiting-time scans, higher barrier',
      [
        { exitMv: -626, tauUs: 1.9, seed: 626 },
        { exitMv: -630, tauUs: 2.6, seed: 630 },
      ],
      { state: 'signed' },
    ),
    workingPoint({
      daysAgo: 6,
      title: 'Escape over the exit barrier, day two',
      escape: 0.919,
      seed: 931,
      state: 'signed',
      question: { text: 'Was the offset taken before or after the gate was ramped?', answer: null },
    }),
    workingPoint({
      daysAgo: 5,
      title: 'Repeat of day two with the bath at 4.18 K',
      escape: 0.917,
      seed: 5,
      state: 'signed',
      author: 'ines',
      question: { text: 'Is the drive amplitude the same as on day two?', answer: 'Yes, 180 mV at the generator.' },
    }),
    stability(4, 'Plateau current of SK4-D2, second night', 4, { state: 'draft' }),
    note(
      3,
      'Brine 12: helium level and cold-trap change',
      ['Trap changed at 09:20.', 'Base temperature back at 12 mK at 11:05.'],
      { cooldown: 'brine12', devices: ['c7', 'd2'], state: 'draft', author: 'ines' },
    ),
    workingPoint({ daysAgo: 2, title: 'Escape at −606 mV', escape: 0.96, seed: 606, state: 'draft' }),
    waitingScans(1, 'Waiting-time scan at the working point', [{ exitMv: -620, tauUs: 1.05, seed: 620 }], {
      state: 'draft',
    }),
    note(0, 'Tern 24: today', ['Level 54 %, bath 4.20 K.'], {
      book: 'escape',
      cooldown: 'tern24',
      devices: ['ga'],
      state: 'fresh',
    }),
  ];
}
