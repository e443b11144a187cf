import { one } from '@/lib/units/choose';
import { each2, type Series } from './arithmetic';
import { exactInput, type Input } from './input';
import type { Quantity, Scalar, Term } from './quantity';

/**
 * The quantities that one line reads, as variables of that line. Its steps then carry one derivative for each symbol
 * in the line instead of one for each input behind the symbols, and the chain rule is applied once, at the end:
 * ∂y/∂x = Σ ∂y/∂s · ∂s/∂x over the symbols s.
 */
export class Leaves {
  private readonly originals = new Map<string, Scalar>();

  /** Stands for `scalar` until `expand`. Few inputs are carried along as they are. */
  local(name: string, scalar: Scalar): Scalar {
    if (scalar.terms.size <= 2) return scalar;
    const id = `line:${name}`;
    let uncertain = false;
    for (const { input } of scalar.terms.values()) uncertain ||= input.u > 0;
    const input: Input = { ...placeholder, id, label: name, u: uncertain ? 1 : 0 };
    this.originals.set(id, scalar);
    return { ...scalar, terms: new Map([[id, { input, c: 1 }]]) };
  }

  /** The same quantity by the inputs behind the symbols. */
  expand<Q extends Quantity>(quantity: Q): Q {
    if (this.originals.size === 0) return quantity;
    const terms = new Map<string, Term<Series>>();
    for (const [id, term] of quantity.terms) {
      const original = this.originals.get(id);
      if (!original) add(terms, id, term.input, term.c);
      else for (const [inner, { input, c }] of original.terms) add(terms, inner, input, times(term.c, c));
    }
    return { ...quantity, terms };
  }
}

const placeholder = exactInput('', '', 0, one, null);

function times(a: Series, b: number): Series {
  return typeof a === 'number' ? a * b : a.map((x) => x * b);
}

function add(terms: Map<string, Term<Series>>, id: string, input: Input, c: Series): void {
  const before = terms.get(id)?.c;
  if (before === undefined) terms.set(id, { input, c });
  else if (typeof before === 'number' && typeof c === 'number') terms.set(id, { input, c: before + c });
  else terms.set(id, { input, c: each2(before, c, (x, y) => x + y) });
}
