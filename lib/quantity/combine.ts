import type { Correlations } from './correlation';
import type { Input } from './input';
import type { Scalar } from './quantity';
import { coverageFactor } from './student';

/** Coverage probability that expanded uncertainties have: two standard deviations of a normal distribution. */
export const coverage = 0.9545;

/**
 * What a scalar's contributions add up to. `dof` null with `k` given: infinitely many degrees of freedom. `k` null: the
 * contributions are correlated across groups, no ν_eff is claimed (`Welch-Satterthwaite` holds for independent ones).
 */
export type Combined = {
  /** In coherent SI units. */
  u: number;
  dof: number | null;
  k: number | null;
  warnings: string[];
};

type Contribution = { input: Input; amount: number; group: string };

/**
 * u(y) by the law of propagation with correlations (GUM 5.2.2, eq. 16) and ν_eff by Welch-Satterthwaite (GUM G.4.1)
 * over groups: means over the same rows of one trace are one group, with its covariance and the fewest degrees of
 * freedom of its members; any other input is a group of its own.
 */
export function combine(scalar: Scalar, correlations: Correlations): Combined {
  let sampled = 0;
  for (const { input } of scalar.terms.values()) if (correlates(input) && input.u !== 0) sampled++;
  return sampled > 1 ? combineCorrelated(scalar, correlations) : combineIndependent(scalar);
}

/** Without two inputs that may be correlated every one is a group of its own. */
function combineIndependent(scalar: Scalar): Combined {
  let variance = 0;
  for (const { input, c } of scalar.terms.values()) variance += (c * input.u) ** 2;
  if (variance === 0) return { u: 0, dof: null, k: coverageFactor(coverage, null), warnings: [] };
  let below = 0;
  for (const { input, c } of scalar.terms.values()) {
    if (input.dof !== null) below += ((c * input.u) ** 2 / variance) ** 2 / input.dof;
  }
  const dof = below > 0 ? Math.max(1, 1 / below) : null;
  return { u: Math.sqrt(variance), dof, k: coverageFactor(coverage, dof), warnings: [] };
}

/** Whether an input may be correlated with another: statistics of samples, and results of one fit. */
const correlates = (input: Input): boolean =>
  input.sample !== null || input.correlated !== undefined || input.group !== undefined;

function combineCorrelated(scalar: Scalar, correlations: Correlations): Combined {
  const sampled: Contribution[] = [];
  const warnings: string[] = [];
  let squares = 0;
  for (const { input, c } of scalar.terms.values()) {
    const amount = c * input.u;
    squares += amount * amount;
    if (amount !== 0 && correlates(input)) {
      sampled.push({ input, amount, group: input.sample?.group ?? input.group ?? input.id });
    }
  }
  const groups = new Map<string, { variance: number; dof: number | null }>();
  for (const { input, amount, group } of sampled) {
    const before = groups.get(group);
    const dof = before ? fewer(before.dof, input.dof) : input.dof;
    groups.set(group, { variance: (before?.variance ?? 0) + amount * amount, dof });
  }
  let variance = squares;
  let acrossGroups: [Input, Input] | null = null;
  for (let i = 0; i < sampled.length; i++) {
    for (let j = i + 1; j < sampled.length; j++) {
      const [a, b] = [sampled[i], sampled[j]];
      const { r, known } = correlations.between(a.input, b.input);
      if (!known) {
        warnings.push(
          `How ${a.input.label} and ${b.input.label} are correlated is not known; they share samples and were taken as independent.`,
        );
      }
      if (r === 0) continue;
      const covariance = 2 * r * a.amount * b.amount;
      variance += covariance;
      const group = groups.get(a.group);
      if (a.group === b.group && group) group.variance += covariance;
      else if (Math.abs(r) > 1e-9) acrossGroups ??= [a.input, b.input];
    }
  }
  // What is left of contributions that cancel is rounding.
  if (variance < 1e-14 * squares) variance = 0;
  const u = Math.sqrt(variance);
  if (u === 0) return { u: 0, dof: null, k: coverageFactor(coverage, null), warnings };
  if (acrossGroups) {
    warnings.push(
      `${acrossGroups[0].label} and ${acrossGroups[1].label} share some of their samples; with correlated inputs of finite degrees of freedom no effective degrees of freedom and no coverage factor are claimed.`,
    );
    return { u, dof: null, k: null, warnings };
  }
  let below = 0;
  for (const { variance: part, dof } of groups.values()) {
    if (dof !== null && part > 0) below += (part / variance) ** 2 / dof;
  }
  for (const { input, c } of scalar.terms.values()) {
    if (!correlates(input) && input.dof !== null) below += ((c * input.u) ** 2 / variance) ** 2 / input.dof;
  }
  const dof = below > 0 ? Math.max(1, 1 / below) : null;
  return { u, dof, k: coverageFactor(coverage, dof), warnings };
}

function fewer(a: number | null, b: number | null): number | null {
  if (a === null) return b;
  return b === null ? a : Math.min(a, b);
}

/** Covariance of two scalars through the inputs that they share or that are correlated (GUM F.1.2.3, H.2.3). */
export function covariance(a: Scalar, b: Scalar, correlations: Correlations): number {
  let total = 0;
  for (const x of a.terms.values()) {
    for (const y of b.terms.values()) {
      const r = x.input.id === y.input.id ? 1 : correlations.between(x.input, y.input).r;
      if (r !== 0) total += r * x.c * x.input.u * y.c * y.input.u;
    }
  }
  return total;
}
