import type { Node as ProseMirrorNode } from '@tiptap/pm/model';
import type { TraceNodeAttributes } from '@/lib/document/attributes';
import { sameDocument } from '@/lib/document/same';
import type { CellSource, DerivedColumn, Sheet, SheetInput, ValueResult } from '@/lib/expression/contract';
import type { TraceDto } from '@/lib/schemas/entry';
import { ColumnCache } from './columns';
import { gather, type Gathered } from './gather';
import { longestLocalTrace, traceSource } from './trace-source';

const remoteRest = 400;

export type RemoteBody = {
  cells: CellSource[];
  traces: Pick<TraceNodeAttributes, 'traceId' | 'handle' | 'settings' | 'spans'>[];
};

export type SheetPorts = {
  evaluate: (input: SheetInput, previous?: Sheet) => Sheet;
  fetchColumn: (traceId: string, index: number) => Promise<Float64Array>;
  evaluateRemotely: (body: RemoteBody) => Promise<ValueResult[]>;
  nextFrame: (run: () => void) => () => void;
  delay: (run: () => void, ms: number) => () => void;
};

/** Recalculates an entry's values as its document changes, and tells whoever shows them. */
export class SheetStore {
  private gathered: Gathered = { cells: [], traces: [] };
  private sheet: Sheet | null = null;
  private remote = new Map<string, ValueResult>();
  private remoteAsked: RemoteBody | null = null;
  private remoteProblem: string | null = null;
  private bound: Map<string, ValueResult> | null = null;
  private preview: { id: string; source: string } | null = null;
  private traces = new Map<string, TraceDto>();
  private cancelFrame: (() => void) | null = null;
  private cancelRemote: (() => void) | null = null;
  private readonly listeners = new Set<() => void>();
  private readonly columns: ColumnCache;
  /** How long the last evaluation took, in ms. */
  lastDuration = 0;

  constructor(private readonly ports: SheetPorts) {
    this.columns = new ColumnCache(ports.fetchColumn, () => this.soon());
  }

  subscribe = (listener: () => void): (() => void) => {
    this.listeners.add(listener);
    return () => this.listeners.delete(listener);
  };

  /** Results as a version has bound them; they are shown instead of a recalculation. */
  bind(values: ValueResult[]): void {
    this.bound = new Map(values.map((value) => [value.id, value]));
    this.tell();
  }

  setTraces(traces: Iterable<TraceDto>): void {
    this.traces = new Map(Array.from(traces, (trace) => [trace.id, trace]));
    this.soon();
  }

  setDocument(doc: ProseMirrorNode): void {
    const gathered = gather(doc);
    const same = (a: unknown[], b: unknown[]) => a.length === b.length && a.every((item, index) => item === b[index]);
    if (same(gathered.cells, this.gathered.cells) && same(gathered.traces, this.gathered.traces)) return;
    this.gathered = gathered;
    this.soon();
  }

  /** Evaluates as if the cell already read like this: what a person sees while typing. null ends it. */
  setPreview(id: string, source: string | null): void {
    this.preview = source === null ? null : { id, source };
    this.soon();
  }

  result(id: string): ValueResult | undefined {
    if (this.bound) return this.bound.get(id);
    const local = this.sheet?.results.get(id);
    if (local?.state !== 'pending') return local;
    return this.remote.get(id) ?? local;
  }

  /** All results in reading order. */
  results(): ValueResult[] {
    if (this.bound) return [...this.bound.values()];
    return this.gathered.cells.flatMap((cell) => this.result(cell.id) ?? []);
  }

  column(symbol: string): DerivedColumn | undefined {
    return this.sheet?.columns.get(symbol);
  }

  columnsOf(handle: string): DerivedColumn[] {
    return [...(this.sheet?.columns.values() ?? [])].filter((column) => column.handle === handle);
  }

  /** Whether a value is shown that the document could take as its author's `shown`. */
  settled(): boolean {
    return this.preview === null && this.bound === null && this.cancelFrame === null;
  }

  retry(): void {
    this.columns.retry();
    this.remoteAsked = null;
    this.soon();
  }

  close(): void {
    this.cancelFrame?.();
    this.cancelRemote?.();
    this.listeners.clear();
  }

  private soon(): void {
    this.cancelFrame ??= this.ports.nextFrame(() => {
      this.cancelFrame = null;
      this.evaluate();
    });
  }

  private cells(): CellSource[] {
    const { preview } = this;
    if (!preview) return this.gathered.cells;
    const known = this.gathered.cells.some((cell) => cell.id === preview.id);
    const shown = this.gathered.cells.map((cell) =>
      cell.id === preview.id ? { ...cell, source: preview.source } : cell,
    );
    return known ? shown : [...shown, { ...preview, unit: null, digits: null }];
  }

  private evaluate(): void {
    const cells = this.cells();
    const traces = this.gathered.traces.map((node) =>
      traceSource(node, this.traces.get(node.traceId), (trace, index) =>
        this.columns.column(trace.id, trace.sha256, index),
      ),
    );
    const start = performance.now();
    this.sheet = this.ports.evaluate({ cells, traces }, this.sheet ?? undefined);
    this.lastDuration = performance.now() - start;
    if (!this.bound) this.askServer(cells);
    this.tell();
  }

  private askServer(cells: CellSource[]): void {
    const long = this.gathered.traces.filter((node) => (this.traces.get(node.traceId)?.rows ?? 0) > longestLocalTrace);
    const waits = cells.some((cell) => this.sheet?.results.get(cell.id)?.state === 'pending');
    if (long.length === 0 || !waits) return;
    const traces = this.gathered.traces.map(({ traceId, handle, settings, spans }) => ({
      traceId,
      handle,
      settings,
      spans,
    }));
    const body: RemoteBody = { cells, traces };
    if (this.remoteAsked && sameDocument(this.remoteAsked, body)) return;
    this.cancelRemote?.();
    this.cancelRemote = this.ports.delay(() => {
      this.remoteAsked = body;
      this.ports.evaluateRemotely(body).then(
        (results) => {
          if (this.remoteAsked !== body) return;
          this.remote = new Map(results.map((result) => [result.id, result]));
          this.remoteProblem = null;
          this.tell();
        },
        (error: unknown) => {
          if (this.remoteAsked !== body) return;
          this.remoteAsked = null;
          this.remoteProblem = error instanceof Error ? error.message : 'The server could not be reached.';
          this.tell();
        },
      );
    }, remoteRest);
  }

  /** Why values that only the server can evaluate are missing; null when none are. */
  problem(): string | null {
    return this.remoteProblem;
  }

  private tell(): void {
    for (const listener of this.listeners) listener();
  }
}
