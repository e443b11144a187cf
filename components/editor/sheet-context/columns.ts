import type { RawColumn } from '@/lib/expression/contract';

type Held = { column: RawColumn };

/**
 * Columns of traces as fetched, by the file's digest and the column's place: the same file in two entries is read once.
 * Asking for a column that is not there starts its transfer and answers 'pending'; `arrived` is called when it is.
 */
export class ColumnCache {
  private readonly held = new Map<string, Held>();

  constructor(
    private readonly fetchColumn: (traceId: string, index: number) => Promise<Float64Array>,
    private readonly arrived: () => void,
  ) {}

  column(traceId: string, digest: string, index: number): RawColumn {
    const key = `${digest}/${index}`;
    const known = this.held.get(key);
    if (known) return known.column;
    const held: Held = { column: 'pending' };
    this.held.set(key, held);
    this.fetchColumn(traceId, index).then(
      (values) => {
        held.column = values;
        this.arrived();
      },
      (error: unknown) => {
        const why = error instanceof Error ? error.message : 'the connection failed';
        held.column = { error: `The samples could not be read: ${why}` };
        this.arrived();
      },
    );
    return held.column;
  }

  /** Lets the columns that failed be fetched again at the next question. */
  retry(): void {
    for (const [key, { column }] of this.held) {
      if (typeof column === 'object' && 'error' in column) this.held.delete(key);
    }
  }
}
