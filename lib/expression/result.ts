import { Refusal } from '@/lib/errors/refusal';
import { combine, coverage } from '@/lib/quantity/combine';
import type { Correlations } from '@/lib/quantity/correlation';
import { show, writeText } from '@/lib/quantity/format';
import type { Column, Scalar } from '@/lib/quantity/quantity';
import { sameDimension } from '@/lib/units/dimension';
import { parseUnit, type Unit } from '@/lib/units/parse';
import { budgetOf } from './budget';
import type { BudgetLine, CellError, CellSource, DerivedColumn, ValueResult } from './contract';
import { unitName } from './operations';
import type { Line } from './parse';
import { columnUnit, derivedColumn } from './read-column';
import { resultMathml, wordsMathml } from './typeset';

/** A result with nothing in it but what the line itself says. */
function blank(cell: CellSource, line: Line | null, state: ValueResult['state']): ValueResult {
  return {
    id: cell.id,
    symbol: line?.symbol ?? null,
    state,
    text: null,
    symbolTex: line?.tex.symbol ?? null,
    expressionTex: line?.tex.expression ?? null,
    mathml: null,
    value: null,
    unit: null,
    u: null,
    dof: null,
    k: null,
    expanded: null,
    coverage,
    budget: [],
    dependsOn: line?.dependsOn ?? [],
    warnings: [],
    error: null,
  };
}

export function failed(cell: CellSource, line: Line | null, refusal: Refusal): ValueResult {
  const error: CellError = { code: refusal.code, message: refusal.message };
  return { ...blank(cell, line, 'error'), error };
}

export function pendingResult(cell: CellSource, line: Line): ValueResult {
  return blank(cell, line, 'pending');
}

/** The unit that the author fixed, or that `convert` at the head of the line names; null for the usual choice. */
function wishedUnit(cell: CellSource, line: Line, value: Scalar | Column): Unit | null {
  if (cell.unit === null || cell.unit.trim() === '') {
    return line.tree.kind === 'call' && line.tree.name === 'convert' ? line.tree.unit : null;
  }
  const unit = parseUnit(cell.unit.trim());
  if (!sameDimension(unit.dimension, value.dimension) || (unit.scale !== 'linear' && unit.scale !== value.scale)) {
    throw new Refusal('unit-clash', `${line.symbol} is in ${unitName(value)} and cannot be shown in ${unit.text}.`);
  }
  if (value.scale === 'level' && unit.scale === 'linear') return unit;
  if (value.scale === 'celsius' && unit.scale === 'linear') return unit;
  return unit;
}

export function scalarResult(
  cell: CellSource,
  line: Line,
  scalar: Scalar,
  correlations: Correlations,
  warnings: readonly string[],
): ValueResult {
  const combined = combine(scalar, correlations);
  const shown = show(scalar, combined.u, { unit: wishedUnit(cell, line, scalar), significant: cell.digits });
  // Budgets and MathML are read one value at a time, and made for 200 values at every keystroke they would cost more than
  // all else: they are made when first asked for. The properties are the object's own and enumerable, so that copies and
  // JSON hold them.
  let budget: BudgetLine[] | null = null;
  let mathml: string | null = null;
  return {
    id: cell.id,
    symbol: line.symbol,
    state: 'ok',
    text: writeText(shown),
    symbolTex: line.tex.symbol,
    expressionTex: line.tex.expression,
    get mathml() {
      return (mathml ??= resultMathml(line.tex.symbolMathml, shown));
    },
    value: shown.value,
    unit: shown.unit.text,
    u: shown.u,
    dof: combined.dof,
    k: combined.k,
    expanded: combined.k === null ? null : combined.k * shown.u,
    coverage,
    get budget() {
      return (budget ??= budgetOf(scalar, shown));
    },
    dependsOn: line.dependsOn,
    warnings: warnings.length + combined.warnings.length === 0 ? [] : [...new Set([...warnings, ...combined.warnings])],
    error: null,
  };
}

export function columnResult(
  cell: CellSource,
  line: Line,
  column: Column,
  warnings: readonly string[],
): { result: ValueResult; derived: DerivedColumn } {
  const unit = wishedUnit(cell, line, column) ?? columnUnit(column);
  const words = `column, ${column.values.length} ${column.values.length === 1 ? 'row' : 'rows'}`;
  const result: ValueResult = {
    ...blank(cell, line, 'ok'),
    text: words,
    mathml: wordsMathml(line.tex.symbolMathml, words),
    unit: unit.text,
    warnings: [...new Set(warnings)],
  };
  return { result, derived: derivedColumn(line.symbol, column, unit) };
}
