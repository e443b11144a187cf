import { Refusal } from '@/lib/errors/refusal';
import type { Quantity } from '@/lib/quantity/quantity';
import type { Line } from './parse';

/** A column belongs left of = as `t1.P`, a single value as a symbol. */
export function placed(line: Line, quantity: Quantity): Quantity {
  const { column, symbol } = line;
  if (quantity.kind === 'scalar') {
    if (!column) return quantity;
    throw new Refusal(
      'not-allowed',
      `\`${symbol}\` names a column of ${column.handle}, but a single value stands right of =: write ${column.name} = … instead.`,
    );
  }
  if (!column) {
    throw new Refusal(
      'not-allowed',
      `A column stands right of =: write ${quantity.handle}.${symbol} = …, or take its mean.`,
    );
  }
  if (column.handle !== quantity.handle) {
    throw new Refusal(
      'not-allowed',
      `What stands right of = is a column of ${quantity.handle}: write ${quantity.handle}.${column.name} = ….`,
    );
  }
  return { ...quantity, key: symbol, label: symbol };
}
