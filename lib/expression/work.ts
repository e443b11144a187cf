import { Refusal } from '@/lib/errors/refusal';

/**
 * Work with columns, in rows times operations, that one entry may ask for, and rows of calculated columns that it may
 * keep. Counted rather than timed, so that every engine stops at the same line.
 */
export const mostWork = 4e9;
export const mostKept = 3e7;

export class Work {
  private spent = 0;
  private kept = 0;

  /** Adds to what has been done. Throws a Refusal where the entry asks for too much. */
  spend(amount: number): void {
    this.spent += amount;
    if (this.spent > mostWork) {
      throw new Refusal(
        'too-large',
        'The columns of this entry ask for more work than one entry may: split it, or use shorter traces.',
      );
    }
  }

  keep(rows: number): void {
    this.kept += rows;
    if (this.kept > mostKept) {
      throw new Refusal(
        'too-large',
        `The calculated columns of this entry have more than ${mostKept} rows together: split it.`,
      );
    }
  }

  /** What a line that is taken over cost when it was calculated. */
  takeOver(amount: number, rows: number): void {
    this.spent += amount;
    this.kept += rows;
  }

  get done(): number {
    return this.spent;
  }
}
