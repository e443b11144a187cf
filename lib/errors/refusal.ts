import type { CellError } from '@/lib/expression/contract';

/** Why a line, a unit or a quantity cannot be read or calculated, as a sentence for its author. */
export class Refusal extends Error {
  readonly code: CellError['code'];

  constructor(code: CellError['code'], message: string) {
    super(message);
    this.name = 'Refusal';
    this.code = code;
  }
}

/** What a caught value says; anything that is not a refusal is a fault of ours and goes on. */
export function asRefusal(error: unknown): Refusal {
  if (error instanceof Refusal) return error;
  throw error;
}
