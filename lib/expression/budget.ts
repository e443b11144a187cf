import { inUnit } from '@/lib/units/choose';
import { show, writeSpread, writeText, type Shown } from '@/lib/quantity/format';
import type { Input } from '@/lib/quantity/input';
import type { Scalar } from '@/lib/quantity/quantity';
import { parseUnit, type Unit } from '@/lib/units/parse';
import type { BudgetLine } from './contract';

/**
 * The uncertainty budget of a value (GUM 7.2.7; EA-4/02, section 7): for each input its estimate, u(x), distribution and
 * degrees of freedom, the sensitivity coefficient c = ∂y/∂x and the contribution |c|·u(x). Largest contribution first,
 * exact inputs last.
 */
export function budgetOf(scalar: Scalar, shown: Shown): BudgetLine[] {
  const lines = [...scalar.terms.values()].map(({ input, c }) => line(input, c, scalar, shown.unit));
  return lines.sort(
    (a, b) => b.contribution - a.contribution || (a.type === 'exact' ? 1 : 0) - (b.type === 'exact' ? 1 : 0),
  );
}

const kelvin = parseUnit('K');

function line(input: Input, c: number, scalar: Scalar, unit: Unit): BudgetLine {
  const hint = input.scale === 'linear' ? input.unit : kelvin;
  const amount = Math.abs(c) * input.u;
  const scaleOf = (spread: number): number =>
    unit.scale === 'level'
      ? ((spread / scalar.value) * 10) / Math.LN10
      : unit.scale === 'celsius'
        ? spread
        : inUnit(spread, unit);
  const estimate = show(
    { value: input.estimate, dimension: input.dimension, scale: input.scale, hint: input.unit },
    input.u,
    {
      unit: null,
      significant: null,
    },
  );
  return {
    inputId: input.id,
    input: input.label,
    type: input.type,
    estimate: writeText({ ...estimate, digits: { ...estimate.digits, last: null, plusMinus: null } }),
    u: input.u === 0 ? '0' : writeSpread(input.u, input.dimension, input.scale === 'level' ? null : hint),
    distribution: input.distribution,
    dof: input.dof,
    sensitivity: c,
    contribution: scaleOf(amount),
    contributionText: amount === 0 ? '0' : writeSpread(amount, scalar.dimension, unit.scale === 'linear' ? unit : null),
    note: input.note,
  };
}
