import { Refusal } from '@/lib/errors/refusal';
import { add, divide, negate } from '@/lib/quantity/arithmetic';
import { wattsOfLevel } from '@/lib/quantity/format';
import type { RowRanges } from '@/lib/quantity/input';
import type { Column, Scalar } from '@/lib/quantity/quantity';
import type { StatedQuantity } from '@/lib/document/attributes';
import { fromUnit, unitFor } from '@/lib/units/choose';
import { multiplyDimensions, sameDimension } from '@/lib/units/dimension';
import { parseUnit, type Unit } from '@/lib/units/parse';
import { celsiusZero } from '@/lib/units/table';
import { calculate } from './calculate';
import { Pending, type Context } from './context';
import type { TraceSource } from './contract';
import { readLiteral } from './literal';
import { parseExpression } from './parse';
import { normaliseName } from './scan';
import { statedLiteral } from './stated';

/** Most rows of a trace that are calculated with at once. */
export const mostRows = 20_000_000;

const ampere = [0, 0, 0, 1, 0, 0, 0] as const;

/** A context in which only numbers, units and constants stand: for what settings state. */
function bareContext(context: Pick<Context, 'correlations' | 'statistics'>, id: string, label: string): Context {
  const refuse = (name: string): never => {
    throw new Refusal('not-allowed', `${label} is stated by numbers and units alone; \`${name}\` is not among them.`);
  };
  return {
    ...context,
    id,
    symbol: label,
    symbolValue: refuse,
    column: (handle, name) => refuse(`${handle}.${name}`),
    span: (_, name) => refuse(name),
    isSymbol: () => false,
    warn: () => undefined,
    spend: () => undefined,
  };
}

/**
 * A quantity as settings state it: a literal (`1e9 V/A ± 50 ppm`), or an expression of numbers such as
 * `rectangular(0 V, 2 mV)`. `id` is the identity of the input, `label` its name in sentences and budgets.
 */
export function statedText(
  text: string,
  id: string,
  label: string,
  context: Pick<Context, 'correlations' | 'statistics'>,
): Scalar {
  const trimmed = text.trim();
  if (trimmed === '') throw new Refusal('syntax', `${label} is empty: state it with its unit, or remove it.`);
  try {
    if (/^[\d.(]/.test(trimmed)) {
      const { literal, end } = readLiteral(trimmed, 0, true);
      if (end === trimmed.length) return statedLiteral(literal, { id: `${id}#0`, label });
    }
    const value = calculate(parseExpression(trimmed).tree, bareContext(context, id, label));
    if (value.kind === 'column') throw new Refusal('not-allowed', `${label} is a single quantity.`);
    return value;
  } catch (error) {
    if (error instanceof Refusal) throw new Refusal(error.code, `${label} (\`${trimmed}\`): ${error.message}`);
    throw error;
  }
}

/** Equal text with equal source is one quantity, however many columns it serves; without a source each column has its own. */
function identity(kind: string, stated: StatedQuantity, trace: TraceSource, index: number): string {
  const source = stated.source.trim();
  return source === '' ? `${kind}|${trace.traceId}|${index}` : `${kind}|${stated.text.trim()}|${source}`;
}

function labelled(kind: string, name: string, stated: StatedQuantity): string {
  const source = stated.source.trim();
  return `${kind} of ${name}${source === '' ? '' : `, ${source}`}`;
}

/** Index of the column that a symbol names, or −1. */
export function columnIndex(trace: TraceSource, name: string): number {
  return trace.settings.columns.findIndex(({ symbol }) => normaliseName(symbol) === name);
}

/**
 * One column of the file as a quantity, (raw · unit − offset)/gain, turned where the trace says that the sign of its
 * currents is reversed. Throws a Refusal, or Pending while its samples are on their way.
 */
export function fileColumn(
  trace: TraceSource,
  index: number,
  context: Pick<Context, 'correlations' | 'statistics'>,
): Column {
  const settings = trace.settings.columns[index];
  if (!settings) throw new Error(`No column ${index} of ${trace.handle}.`);
  const name = `${trace.handle}.${settings.symbol}`;
  if (settings.unit === null) throw new Refusal('unit-missing', `${name} has no unit yet: state it at the trace.`);
  const unit = columnUnit(settings.unit, name);
  const raw = rawSamples(trace, index, name);
  const values = new Float64Array(raw.length);
  for (let row = 0; row < raw.length; row++) values[row] = toSi(raw[row], unit);
  const { handle, digest } = trace;
  let column: Column = {
    kind: 'column',
    handle,
    digest,
    key: name,
    label: name,
    values,
    dimension: unit.dimension,
    scale: unit.scale,
    hint: unit,
    terms: new Map(),
  };
  if (settings.offset) {
    const label = labelled('offset', name, settings.offset);
    const offset = statedText(settings.offset.text, identity('offset', settings.offset, trace, index), label, context);
    if (!sameDimension(offset.dimension, unit.dimension) || offset.scale !== 'linear' || unit.scale === 'level') {
      throw new Refusal(
        'unit-clash',
        `The ${label} is in ${offset.hint?.text || 'a pure number'}; the column is in ${unit.text}.`,
      );
    }
    column = asColumn(
      add(column, offset, { dimension: unit.dimension, scale: unit.scale, hint: unit, label: name }, -1),
    );
  }
  if (settings.gain) {
    const label = labelled('gain', name, settings.gain);
    const gain = statedText(settings.gain.text, identity('gain', settings.gain, trace, index), label, context);
    if (unit.scale !== 'linear' || gain.scale !== 'linear')
      throw new Refusal('unit-clash', `${name} is in ${unit.text}, which cannot be divided by a gain.`);
    if (gain.value === 0) throw new Refusal('division-by-zero', `The ${label} is 0: nothing can be divided by it.`);
    const dimension = multiplyDimensions(unit.dimension, gain.dimension, -1);
    const hint = sameDimension(dimension, unit.dimension) ? unit : null;
    column = asColumn(divide(column, gain, { hint, label: name }));
  }
  if (trace.settings.sign === 'reversed' && sameDimension(column.dimension, ampere))
    column = asColumn(negate(column, name));
  return { ...column, key: name, label: name, hint: column.hint ?? unitFor(column.dimension) };
}

function asColumn(value: Column | Scalar): Column {
  if (value.kind !== 'column') throw new Error('A column became a scalar.');
  return value;
}

function columnUnit(text: string, name: string): Unit {
  try {
    return parseUnit(text.trim());
  } catch (error) {
    if (error instanceof Refusal) throw new Refusal(error.code, `The unit of ${name}: ${error.message}`);
    throw error;
  }
}

function toSi(value: number, unit: Unit): number {
  if (unit.scale === 'celsius') return value + celsiusZero;
  if (unit.scale === 'level') return wattsOfLevel(value);
  return fromUnit(value, unit);
}

function rawSamples(trace: TraceSource, index: number, name: string): Float64Array {
  const raw = trace.column(index);
  if (raw === 'pending') throw new Pending(name);
  if (!(raw instanceof Float64Array)) throw new Refusal('no-data', `${name} cannot be read: ${raw.error}`);
  if (raw.length > mostRows) throw new Refusal('too-large', `${name} has more than ${mostRows} rows.`);
  return raw;
}

/** Rows whose sample of the axis lies in one of the intervals, ends included; in the numbers of the file. */
export function spanRows(
  trace: TraceSource,
  index: number,
  intervals: readonly (readonly [number, number])[],
): RowRanges {
  const axis = rawSamples(trace, index, `${trace.handle}.${trace.settings.columns[index]?.symbol ?? ''}`);
  const merged = mergeIntervals(intervals);
  if (merged.length === 0) return [];
  const ranges: [number, number][] = [];
  let start = -1;
  // Samples mostly follow one another along the axis: the interval met last is tried first.
  let last = 0;
  for (let row = 0; row <= axis.length; row++) {
    const x = row < axis.length ? axis[row] : NaN;
    let inside = x >= merged[last][0] && x <= merged[last][1];
    if (!inside && !Number.isNaN(x)) {
      const found = intervalBefore(merged, x);
      inside = found >= 0 && x <= merged[found][1];
      if (inside) last = found;
    }
    if (inside && start < 0) start = row;
    if (!inside && start >= 0) {
      ranges.push([start, row]);
      start = -1;
    }
  }
  return ranges;
}

/** The same set of numbers as ascending intervals that do not touch. */
function mergeIntervals(intervals: readonly (readonly [number, number])[]): [number, number][] {
  const sorted = intervals
    .map(([a, b]): [number, number] => [Math.min(a, b), Math.max(a, b)])
    .sort((p, q) => p[0] - q[0]);
  const merged: [number, number][] = [];
  for (const [from, to] of sorted) {
    const before = merged.at(-1);
    if (before && from <= before[1]) before[1] = Math.max(before[1], to);
    else merged.push([from, to]);
  }
  return merged;
}

/** Index of the last interval that begins at or below x, or −1. */
function intervalBefore(merged: readonly (readonly [number, number])[], x: number): number {
  let low = 0;
  let high = merged.length;
  while (low < high) {
    const middle = (low + high) >> 1;
    if (merged[middle][0] <= x) low = middle + 1;
    else high = middle;
  }
  return low - 1;
}
