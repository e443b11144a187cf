import { Refusal } from '@/lib/errors/refusal';
import type { Scalar } from '@/lib/quantity/quantity';

/** Refuses a value out of range, and one whose uncertainty first order cannot give (asin at 1, √ at 0). */
export function refuseUndetermined(scalar: Scalar): void {
  if (!Number.isFinite(scalar.value)) throw new Refusal('too-large', 'The result is beyond the range of numbers here.');
  for (const { input, c } of scalar.terms.values()) {
    if (Number.isFinite(c)) continue;
    throw new Refusal(
      'domain',
      `The result has no finite derivative by ${input.label} here, so that ${input.u > 0 ? 'its uncertainty' : 'its budget'} is not determined to first order.`,
    );
  }
}
