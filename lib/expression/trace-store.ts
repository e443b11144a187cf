import { Refusal } from '@/lib/errors/refusal';
import { rowsIdentity, type RowRanges } from '@/lib/quantity/input';
import type { Column } from '@/lib/quantity/quantity';
import { columnIndex, fileColumn, spanRows } from './columns';
import { Pending, type Context, type SpanRows } from './context';
import type { TraceSource } from './contract';
import { normaliseName } from './scan';

/** A column of a file or the reason why there is none; kept while file and settings are the same. */
type Stored<T> = { key: string; value: T | null; problem: Refusal | Pending | null };

export type StoredTraces = { columns: Map<string, Stored<Column>>; spans: Map<string, Stored<RowRanges>> };

/** Columns and spans of the entry's traces, made when first asked for and taken over from the sheet before. */
export class TraceStore {
  readonly stored: StoredTraces = { columns: new Map(), spans: new Map() };
  private readonly byHandle = new Map<string, TraceSource>();
  private readonly settingsKeys = new Map<string, string>();

  constructor(
    traces: readonly TraceSource[],
    private readonly before: StoredTraces | undefined,
    private readonly context: Pick<Context, 'correlations' | 'statistics'>,
  ) {
    for (const trace of traces) this.byHandle.set(trace.handle, trace);
  }

  /** Whether `t1.I` is a column of a file. */
  fileColumn(name: string): boolean {
    const [handle = '', column = ''] = name.split('.');
    const trace = this.byHandle.get(handle);
    return trace !== undefined && columnIndex(trace, column) >= 0;
  }

  /** The stored column of `t1.I`, comparable by identity from sheet to sheet; undefined where there is none. */
  column(name: string): Stored<Column> | undefined {
    const [handle = '', column = ''] = name.split('.');
    const trace = this.byHandle.get(handle);
    const index = trace ? columnIndex(trace, column) : -1;
    if (!trace || index < 0) return undefined;
    return this.keep(
      'columns',
      name,
      this.columnKey(trace, index),
      () => fileColumn(trace, index, this.context),
      trace.column(index) === 'pending',
    );
  }

  /** The stored rows of the span `t1.on`. */
  span(name: string): Stored<RowRanges> | undefined {
    const [handle = '', spanName = ''] = name.split('.');
    const trace = this.byHandle.get(handle);
    const span = trace?.spans.find((candidate) => normaliseName(candidate.name) === spanName);
    const index = trace && span ? columnIndex(trace, normaliseName(span.axis)) : -1;
    if (!trace || !span || index < 0) return undefined;
    const key = `${trace.traceId}|${trace.digest}|${trace.rows}|${index}|${JSON.stringify(span.intervals)}`;
    return this.keep(
      'spans',
      name,
      key,
      () => spanRows(trace, index, span.intervals),
      trace.column(index) === 'pending',
    );
  }

  columnValue(handle: string, name: string): Column {
    const stored = this.column(`${handle}.${name}`);
    if (!stored) throw this.unknownColumn(handle, name);
    if (!stored.value) throw stored.problem ?? new Refusal('no-data', `${handle}.${name} has no samples.`);
    return stored.value;
  }

  spanRows(handle: string, name: string): SpanRows {
    const trace = this.byHandle.get(handle);
    const stored = this.span(`${handle}.${name}`);
    const axis = trace?.spans.find((span) => normaliseName(span.name) === name)?.axis;
    if (!stored) {
      if (axis !== undefined)
        throw new Refusal(
          'unknown-name',
          `The span ${name} of ${handle} lies on \`${axis}\`, which is not a column of the file.`,
        );
      const names = trace?.spans.map((span) => span.name) ?? [];
      const known = names.length > 0 ? ` Its spans: ${names.join(', ')}.` : ' Draw one over its plot.';
      throw new Refusal('unknown-name', `${handle} has no span \`${name}\`.${known}`);
    }
    if (!stored.value) throw stored.problem ?? new Refusal('no-data', `The span ${name} of ${handle} cannot be read.`);
    const rows = stored.value;
    if (rows.length === 0)
      throw new Refusal('no-data', `The span ${name} of ${handle} holds no rows: move it over the samples.`);
    const rowsKey = rowsIdentity(rows);
    return { name, rows, rowsKey, axis: () => this.columnValue(handle, normaliseName(axis ?? '')) };
  }

  private unknownColumn(handle: string, name: string): Refusal {
    const trace = this.byHandle.get(handle);
    if (!trace) {
      const known = [...this.byHandle.keys()];
      return new Refusal(
        'unknown-name',
        `There is no trace \`${handle}\` in this entry.${known.length > 0 ? ` Its traces: ${known.join(', ')}.` : ' Attach one first.'}`,
      );
    }
    const symbols = trace.settings.columns.map(({ symbol }) => symbol);
    return new Refusal(
      'unknown-name',
      `${handle} has no column \`${name}\`. Its columns: ${symbols.slice(0, 12).join(', ')}.`,
    );
  }

  private columnKey(trace: TraceSource, index: number): string {
    let settings = this.settingsKeys.get(trace.handle);
    if (settings === undefined) {
      settings = JSON.stringify([trace.traceId, trace.digest, trace.rows, trace.settings.sign]);
      this.settingsKeys.set(trace.handle, settings);
    }
    return `${settings}|${index}|${JSON.stringify(trace.settings.columns[index])}`;
  }

  private keep<K extends keyof StoredTraces>(
    kind: K,
    name: string,
    key: string,
    make: () => K extends 'columns' ? Column : RowRanges,
    pending: boolean,
  ): K extends 'columns' ? Stored<Column> : Stored<RowRanges>;
  private keep(
    kind: keyof StoredTraces,
    name: string,
    key: string,
    make: () => Column | RowRanges,
    pending: boolean,
  ): Stored<Column | RowRanges> {
    const here = this.stored[kind] as Map<string, Stored<Column | RowRanges>>;
    const made = here.get(name);
    if (made) return made;
    const earlier = this.before?.[kind].get(name) as Stored<Column | RowRanges> | undefined;
    // Samples that were on their way, or could not be read, are asked for again.
    const reusable =
      earlier?.key === key && (earlier.value !== null || (earlier.problem instanceof Pending && pending));
    const stored = reusable && earlier ? earlier : this.make(key, make);
    here.set(name, stored);
    return stored;
  }

  private make(key: string, make: () => Column | RowRanges): Stored<Column | RowRanges> {
    try {
      return { key, value: make(), problem: null };
    } catch (error) {
      if (error instanceof Refusal || error instanceof Pending) return { key, value: null, problem: error };
      throw error;
    }
  }
}
