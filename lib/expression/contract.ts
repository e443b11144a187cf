import type { Span, TraceSettings } from '@/lib/document/attributes';

/** What the evaluation of an entry takes and gives. Pure data, so that browser, server and verifier share it. */

export type CellSource = {
  id: string;
  /** The line as typed: `P_esc = (I_on - I_off)/(e*f)`, `t1.P = …`, `f = 200 kHz exactly`. */
  source: string;
  /** Unit and significant digits of the uncertainty fixed by the author, or null for the usual choice. */
  unit: string | null;
  digits: number | null;
};

/** Samples of one column exactly as in the file (before unit, gain, offset and sign); NaN where missing. */
export type RawColumn = Float64Array | 'pending' | { error: string };

export type TraceSource = {
  traceId: string;
  handle: string;
  fileName: string;
  /** SHA-256 of the file's bytes, hex: the identity of its samples. */
  digest: string;
  rows: number;
  settings: TraceSettings;
  spans: Span[];
  column: (index: number) => RawColumn;
};

export type Distribution = 'normal' | 't' | 'rectangular' | 'triangular' | 'arcsine';

export type BudgetLine = {
  /** Identity of the input: equal ids are the same input, however often it is used. */
  inputId: string;
  /** As a reader knows it: `I_on`, `gain of t1.I, CAL-0181`. */
  input: string;
  type: 'A' | 'B' | 'exact';
  estimate: string;
  u: string;
  distribution: Distribution;
  dof: number | null;
  /** ∂y/∂x in coherent SI, and |∂y/∂x|·u(x) in the unit of the result. */
  sensitivity: number;
  contribution: number;
  contributionText: string;
  /** `no uncertainty stated`, `t1.I over on: 22 400 samples, 61 effective`. */
  note: string | null;
};

export type CellError = {
  code:
    | 'syntax'
    | 'unknown-name'
    | 'unknown-unit'
    | 'unit-missing'
    | 'unit-clash'
    | 'circle'
    | 'defined-twice'
    | 'division-by-zero'
    | 'domain'
    | 'no-data'
    | 'not-allowed'
    | 'too-large'
    | 'correlated-dof';
  /** A sentence: what is wrong and what to do. */
  message: string;
};

export type ValueResult = {
  id: string;
  /** `P_esc`, `t1.P`; null when the line could not be read so far. */
  symbol: string | null;
  state: 'ok' | 'error' | 'pending';
  /** The result as shown, without the symbol: `0.9191(47)`, `29.66(12) fA`; for a column `column, 24 rows`. */
  text: string | null;
  /** TeX and MathML of the symbol, and of the expression, for typesetting; upright units, italic symbols. */
  symbolTex: string | null;
  expressionTex: string | null;
  mathml: string | null;
  /** Of a scalar: in `unit`. null for columns and errors. */
  value: number | null;
  unit: string | null;
  u: number | null;
  dof: number | null;
  k: number | null;
  expanded: number | null;
  /** Coverage probability that k and expanded belong to. */
  coverage: number;
  budget: BudgetLine[];
  /** Symbols, columns and spans it reads, in order of use. */
  dependsOn: string[];
  warnings: string[];
  error: CellError | null;
};

export type DerivedColumn = {
  /** `t1.P` */
  symbol: string;
  handle: string;
  unit: string;
  /** In `unit`, one per row of the trace; NaN where undefined. */
  values: Float64Array;
  /** Inputs that all rows have in common (offset, gain, scalars): a fit takes them apart from the scatter of the rows. */
  shared: SharedInput[];
};

export type SharedInput = {
  inputId: string;
  /** As a reader knows it: `gain of t1.I, CAL-0181`. */
  input: string;
  dof: number | null;
  distribution: Distribution;
  /** By how much each row moves, in the column's unit, where the input is larger by its standard uncertainty. */
  shift: Float64Array;
};

export type Sheet = {
  engine: string;
  results: Map<string, ValueResult>;
  columns: Map<string, DerivedColumn>;
};

/**
 * A quantity that lines name with a point and that stands neither in a line nor in a trace: the result of an analysis
 * (`esc1.tau`), a parameter of the device or the cooldown (`device.alpha_exit`).
 */
export type GivenQuantity = {
  name: string;
  /** As budgets name it: `tau of esc1`. */
  label: string;
  /** In `unit`; `u` null where no uncertainty is stated. */
  value: number;
  unit: string;
  u: number | null;
  /** null: infinitely many. */
  dof: number | null;
  type: 'A' | 'B';
  note: string | null;
  /** Results of one fit are one group with its degrees of freedom; null for a quantity by itself. */
  group: string | null;
  /** Correlation coefficients with other given quantities, by their names; each pair is stated on both. */
  correlation: Record<string, number> | null;
};

export type SheetInput = { cells: CellSource[]; traces: TraceSource[]; given?: GivenQuantity[] };

// The implementation's face:
//   export const engineVersion: string                                             lib/expression/engine.ts
//   export function evaluateSheet(input: SheetInput, previous?: Sheet): Sheet        lib/expression/evaluate.ts
// `previous` lets unchanged cells and statistics be taken over.
