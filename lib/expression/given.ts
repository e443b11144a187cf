import { Refusal } from '@/lib/errors/refusal';
import type { Input } from '@/lib/quantity/input';
import { fromInput, type Scalar } from '@/lib/quantity/quantity';
import { fromUnit } from '@/lib/units/choose';
import { parseUnit } from '@/lib/units/parse';
import { celsiusZero } from '@/lib/units/table';
import type { GivenQuantity } from './contract';

type Kept = { key: string; scalar: Scalar | null; problem: Refusal | null };

export type KeptGiven = Map<string, Kept>;

/** Quantities that come from elsewhere than lines and traces: results of analyses, parameters of devices and cooldowns. */
export class GivenStore {
  readonly kept: KeptGiven = new Map();

  constructor(given: readonly GivenQuantity[], before: KeptGiven | undefined) {
    for (const one of given) {
      const key = JSON.stringify(one);
      const earlier = before?.get(one.name);
      this.kept.set(one.name, earlier?.key === key ? earlier : keep(one, key));
    }
  }

  /** Comparable by identity from sheet to sheet. */
  find(name: string): Kept | undefined {
    return this.kept.get(name);
  }

  value(kept: Kept): Scalar {
    if (kept.scalar) return kept.scalar;
    throw kept.problem ?? new Refusal('no-data', 'This quantity has no value.');
  }
}

const idOf = (name: string) => `given:${name}`;

function keep(given: GivenQuantity, key: string): Kept {
  try {
    return { key, scalar: fromInput(inputOf(given)), problem: null };
  } catch (error) {
    if (error instanceof Refusal) return { key, scalar: null, problem: error };
    throw error;
  }
}

function inputOf(given: GivenQuantity): Input {
  const unit = parseUnit(given.unit);
  if (unit.scale === 'level') throw new Refusal('unit-clash', `\`${given.name}\` is given in dBm: give it in W.`);
  if (!Number.isFinite(given.value) || (given.u !== null && !(given.u >= 0 && Number.isFinite(given.u)))) {
    throw new Refusal('no-data', `\`${given.name}\` has no finite value and uncertainty.`);
  }
  const celsius = unit.scale === 'celsius';
  const u = given.u === null ? 0 : celsius ? given.u : fromUnit(given.u, unit);
  return {
    id: idOf(given.name),
    label: given.label,
    type: u === 0 ? 'exact' : given.type,
    estimate: celsius ? given.value + celsiusZero : fromUnit(given.value, unit),
    u,
    dimension: unit.dimension,
    unit,
    scale: unit.scale,
    distribution: given.dof === null ? 'normal' : 't',
    dof: given.dof,
    note: given.note ?? (given.u === null ? 'no uncertainty stated' : null),
    sample: null,
    ...(given.group ? { group: given.group } : {}),
    ...(given.correlation
      ? { correlated: new Map(Object.entries(given.correlation).map(([name, r]) => [idOf(name), r])) }
      : {}),
  };
}
