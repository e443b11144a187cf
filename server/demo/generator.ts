import 'server-only';
import { elementaryCharge } from '@/lib/constants/constants';

/**
 * Traces of the demonstration: made from the published models with noise, offset and drift from a seed, so that every
 * installation shows the same ones. Each file says in its header that it is invented.
 */

/** mulberry32, a small well-mixed generator; equal seeds give equal traces. */
function randomFrom(seed: number): { uniform: () => number; normal: () => number } {
  let state = seed >>> 0;
  const uniform = () => {
    state = (state + 0x6d2b79f5) >>> 0;
    let t = Math.imul(state ^ (state >>> 15), 1 | state);
    t = (t + Math.imul(t ^ (t >>> 7), 61 | t)) ^ t;
    return ((t ^ (t >>> 14)) >>> 0) / 4294967296;
  };
  // Box and Muller; 1 − u avoids the logarithm of zero.
  const normal = () => Math.sqrt(-2 * Math.log(1 - uniform())) * Math.cos(2 * Math.PI * uniform());
  return { uniform, normal };
}

export type TraceFile = { name: string; text: string };

const header = (what: string, facts: string[]) =>
  [`# INVENTED DATA, Fjordheim demonstration: ${what}`, ...facts.map((fact) => `# ${fact}`)].join('\n');

/** Current of one electron per cycle, in fA. */
const perCycleFa = (frequencyHz: number) => elementaryCharge.value * frequencyHz * 1e15;

type OnOff = {
  name: string;
  seed: number;
  frequencyHz: number;
  escape: number;
  offsetFa: number;
  noiseFa: number;
  rows?: number;
};

/** Drive on at 14–46 s and 74–106 s of 120 s, off otherwise; white noise with a little correlation, as an amplifier's filter makes. */
export function onOffRun({ name, seed, frequencyHz, escape, offsetFa, noiseFa, rows = 24000 }: OnOff): TraceFile {
  const random = randomFrom(seed);
  const lines = [header('on-off run', [`drive = ${frequencyHz / 1e3} kHz`, 'V_exit held']), 't (s),I (fA),V_exit (mV)'];
  let slow = 0;
  for (let i = 0; i < rows; i += 1) {
    const t = (i * 120) / rows;
    const on = (t >= 14 && t < 46) || (t >= 74 && t < 106);
    slow = 0.6 * slow + random.normal() * noiseFa * 0.8;
    const current = offsetFa + (on ? escape * perCycleFa(frequencyHz) : 0) + slow;
    lines.push(`${t.toFixed(3)},${current.toFixed(3)},${(-620 + 0.002 * random.normal()).toFixed(3)}`);
  }
  return { name, text: `${lines.join('\n')}\n` };
}

type WaitScan = {
  name: string;
  seed: number;
  frequencyHz: number;
  tauUs: number;
  exitMv: number;
  offsetFa: number;
  noiseFa: number;
};

/** Escape probability 1 − exp(−t/τ) against waiting time (one exponential), as a current. */
export function waitingTimeScan({ name, seed, frequencyHz, tauUs, exitMv, offsetFa, noiseFa }: WaitScan): TraceFile {
  const random = randomFrom(seed);
  const lines = [
    header('waiting-time scan', [`drive = ${frequencyHz / 1e3} kHz`, `V_exit = ${exitMv} mV`]),
    't_wait (us),I (fA)',
  ];
  for (let i = 0; i < 24; i += 1) {
    const t = 0.15 + i * 0.18;
    const current = offsetFa + perCycleFa(frequencyHz) * (1 - Math.exp(-t / tauUs)) + noiseFa * random.normal();
    lines.push(`${t.toFixed(2)},${current.toFixed(3)}`);
  }
  return { name, text: `${lines.join('\n')}\n` };
}

type Staircase = { name: string; seed: number; frequencyHz: number; noisePa: number; delta: number };

/** Decay cascade (Kashcheyevs and Kaestner, Phys. Rev. Lett. 104, 186805, 2010) over an exit gate, with semicolons and decimal commas. */
export function staircaseScan({ name, seed, frequencyHz, noisePa, delta }: Staircase): TraceFile {
  const random = randomFrom(seed);
  const comma = (value: number, digits: number) => value.toFixed(digits).replace('.', ',');
  const lines = [header('staircase scan', [`drive = ${frequencyHz / 1e6} MHz`]), 'V_exit (mV);I (pA)'];
  const perVolt = 0.9; // 1/mV
  for (let i = 0; i <= 240; i += 1) {
    const v = -380 + i * 0.25;
    const step = (m: number) => Math.exp(-Math.exp(-perVolt * (v + 368 - (m * delta) / perVolt)));
    const n = step(0) + step(1) + step(2);
    lines.push(
      `${comma(v, 2)};${comma(n * elementaryCharge.value * frequencyHz * 1e12 + noisePa * random.normal(), 5)}`,
    );
  }
  return { name, text: `${lines.join('\r\n')}\r\n` };
}

type Stability = {
  name: string;
  seed: number;
  rows: number;
  currentPa: number;
  noisePa: number;
  driftPaPerHour: number;
};

/** A plateau current over hours: white noise, a slow random walk, a steady drift. */
export function stabilityRun({ name, seed, rows, currentPa, noisePa, driftPaPerHour }: Stability): TraceFile {
  const random = randomFrom(seed);
  const lines = [header('stability run', [`rows = ${rows}`, 'one sample every 0.1 s']), 't / s\tI / pA'];
  let walk = 0;
  for (let i = 0; i < rows; i += 1) {
    walk += noisePa * 0.002 * random.normal();
    const t = i * 0.1;
    lines.push(
      `${t.toFixed(1)}\t${(currentPa + (driftPaPerHour * t) / 3600 + walk + noisePa * random.normal()).toFixed(6)}`,
    );
  }
  return { name, text: `${lines.join('\n')}\n` };
}
