import type { TraceSettings } from '@/lib/document/attributes';
import { Refusal } from '@/lib/errors/refusal';
import { Correlations } from '@/lib/quantity/correlation';
import type { Scalar } from '@/lib/quantity/quantity';
import { show, writeText } from '@/lib/quantity/format';
import { dimensionKey } from '@/lib/units/dimension';
import { parseUnit } from '@/lib/units/parse';
import { statedText } from './columns';
import { StatisticsCache } from './statistics';

const second = dimensionKey(parseUnit('s').dimension);
const hertz = dimensionKey(parseUnit('Hz').dimension);

/** Parts of a cycle that fill it to the last digit are not too long. */
const rounding = 1e-9;

function read(text: string | null, label: string, dimension: string, example: string): Scalar | string | null {
  if (text === null || text.trim() === '') return null;
  try {
    const value = statedText(text, label, label, {
      correlations: new Correlations(),
      statistics: new StatisticsCache(),
    });
    if (dimensionKey(value.dimension) !== dimension)
      return `${label} (\`${text.trim()}\`) is not written as ${example}.`;
    return value;
  } catch (error) {
    if (error instanceof Refusal) return error.message;
    throw error;
  }
}

const written = (value: number, like: Scalar): string =>
  writeText(
    show({ value, dimension: like.dimension, scale: 'linear', hint: null }, 0, { unit: null, significant: null }),
  );

/**
 * Whether load, wait and eject fit into one period of the drive: load + wait + eject ≤ 1/f. Gives a sentence where they
 * do not, or where a field that was filled in cannot be read; null where all is well or not enough is stated to tell.
 */
export function checkTiming(drive: TraceSettings['drive']): string | null {
  const frequency = read(drive.frequency, 'The drive frequency', hertz, 'a frequency, as in 200 kHz');
  if (typeof frequency === 'string') return frequency;
  if (frequency && frequency.value <= 0) return 'The drive frequency is not positive.';
  let total = 0;
  let like: Scalar | null = null;
  for (const [label, text] of [
    ['The load time', drive.load],
    ['The waiting time', drive.wait],
    ['The eject time', drive.eject],
  ] as const) {
    const time = read(text, label, second, 'a time, as in 1.5 µs');
    if (typeof time === 'string') return time;
    if (!time) continue;
    if (time.value < 0) return `${label} is negative.`;
    total += time.value;
    like = time;
  }
  if (!frequency || !like) return null;
  const period = 1 / frequency.value;
  if (total <= period * (1 + rounding)) return null;
  return `Load, wait and eject take ${written(total, like)} together, longer than one period of the drive, 1/f = ${written(period, like)}: shorten one of them or lower the frequency.`;
}
