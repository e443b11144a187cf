import { Refusal } from '@/lib/errors/refusal';
import { levelOfWatts } from '@/lib/quantity/format';
import { Correlations } from '@/lib/quantity/correlation';
import type { Column } from '@/lib/quantity/quantity';
import { inUnit, readableUnit } from '@/lib/units/choose';
import type { Unit } from '@/lib/units/parse';
import { celsiusZero } from '@/lib/units/table';
import { columnIndex, fileColumn } from './columns';
import { Pending } from './context';
import type { CellError, DerivedColumn, SharedInput, TraceSource } from './contract';
import { normaliseName } from './scan';
import { StatisticsCache } from './statistics';

/** The unit in which the largest sample reads best. */
export function columnUnit(column: Column): Unit {
  if (column.scale !== 'linear' && column.hint) return column.hint;
  let largest = 0;
  for (let row = 0; row < column.values.length; row++) {
    const size = Math.abs(column.values[row]);
    if (size > largest) largest = size;
  }
  return readableUnit(column.dimension, largest, column.hint);
}

/** A column in `unit`, as plots and analyses take it. */
export function derivedColumn(symbol: string, column: Column, unit: Unit): DerivedColumn {
  const values = new Float64Array(column.values.length);
  for (let row = 0; row < values.length; row++) {
    const value = column.values[row];
    const shown =
      unit.scale === 'celsius'
        ? value - celsiusZero
        : unit.scale === 'level'
          ? levelOfWatts(value)
          : inUnit(value, unit);
    values[row] = Number.isFinite(shown) ? shown : NaN;
  }
  let shared: SharedInput[] | null = null;
  const derived = { symbol, handle: column.handle, unit: unit.text, values, shared: [] };
  // One array for each input: made only for the analysis that asks.
  return Object.defineProperty(derived, 'shared', {
    enumerable: true,
    configurable: true,
    get: () => (shared ??= sharedInputs(column, unit)),
  });
}

function sharedInputs(column: Column, unit: Unit): SharedInput[] {
  const inputs: SharedInput[] = [];
  for (const { input, c } of column.terms.values()) {
    if (input.u === 0) continue;
    const shift = new Float64Array(column.values.length);
    for (let row = 0; row < shift.length; row++) {
      const moved = (typeof c === 'number' ? c : c[row]) * input.u;
      shift[row] =
        unit.scale === 'celsius'
          ? moved
          : unit.scale === 'level'
            ? ((moved / column.values[row]) * 10) / Math.LN10
            : inUnit(moved, unit);
    }
    const { id, label, dof, distribution } = input;
    inputs.push({ inputId: id, input: label, dof, distribution, shift });
  }
  return inputs;
}

/**
 * A column of a file as a quantity, (raw · unit − offset)/gain with the sign of its trace, for plots and analyses.
 * `symbol` is the column's own (`I`). 'pending' while its samples are on their way.
 */
export function readColumn(trace: TraceSource, symbol: string): DerivedColumn | 'pending' | CellError {
  try {
    const index = columnIndex(trace, normaliseName(symbol));
    if (index < 0) throw new Refusal('unknown-name', `${trace.handle} has no column \`${symbol}\`.`);
    const column = fileColumn(trace, index, { correlations: new Correlations(), statistics: new StatisticsCache() });
    return derivedColumn(`${trace.handle}.${symbol}`, column, columnUnit(column));
  } catch (error) {
    if (error instanceof Pending) return 'pending';
    if (error instanceof Refusal) return { code: error.code, message: error.message };
    throw error;
  }
}
