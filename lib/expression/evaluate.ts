import { asRefusal, Refusal } from '@/lib/errors/refusal';
import { Correlations } from '@/lib/quantity/correlation';
import type { Quantity } from '@/lib/quantity/quantity';
import { calculate } from './calculate';
import { Pending, type Context } from './context';
import type { CellSource, DerivedColumn, Sheet, SheetInput, ValueResult } from './contract';
import { engineVersion } from './engine';
import { GivenStore, type KeptGiven } from './given';
import { order } from './graph';
import { parseLine, type Line } from './parse';
import { placed } from './placement';
import { columnResult, failed, pendingResult, scalarResult } from './result';
import { StatisticsCache } from './statistics';
import { TraceStore, type StoredTraces } from './trace-store';
import { unknownName } from './unknown-name';
import { Work } from './work';

/** What became of a line; kept from sheet to sheet while nothing that it read has changed. */
type Outcome = {
  cell: CellSource;
  quantity: Quantity | null;
  result: ValueResult;
  derived: DerivedColumn | null;
  /** What was asked while calculating, and the answer: equal answers give an equal outcome. */
  reads: readonly Read[];
  work: number;
};

type Read = { kind: 'symbol' | 'column' | 'span' | 'defined'; name: string; answer: unknown };

type Parsed = { line: Line | null; refusal: Refusal | null };

type Memory = {
  parsed: Map<string, Parsed>;
  outcomes: Map<string, Outcome>;
  traces: StoredTraces;
  given: KeptGiven;
  correlations: Correlations;
  statistics: StatisticsCache;
};

// Beside the sheets rather than in them: a sheet stays plain data.
const memories = new WeakMap<Sheet, Memory>();

/** Most lines of one entry. */
export const mostCells = 5000;

/**
 * Calculates all lines of an entry, each after what it reads. Errors are results, never exceptions. With `previous`,
 * the sheet made of an earlier state of the same entry, lines are taken over whose text and inputs are unchanged, and
 * statistics whose samples are.
 */
export function evaluateSheet(input: SheetInput, previous?: Sheet): Sheet {
  const memory = previous ? memories.get(previous) : undefined;
  return new Evaluation(input, memory).run();
}

function parseCell(source: string): Parsed {
  try {
    return { line: parseLine(source), refusal: null };
  } catch (error) {
    return { line: null, refusal: asRefusal(error) };
  }
}

class Evaluation {
  private readonly parsed = new Map<string, Parsed>();
  private readonly outcomes = new Map<string, Outcome>();
  /** Lines by symbol, for those that are defined once. */
  private readonly bySymbol = new Map<string, number>();
  private readonly lines: Parsed[] = [];
  private readonly byNumber: (Outcome | undefined)[] = [];
  private readonly work = new Work();
  private readonly store: TraceStore;
  private readonly given: GivenStore;
  private readonly correlations: Correlations;
  private readonly statistics: StatisticsCache;

  constructor(
    private readonly input: SheetInput,
    private readonly memory: Memory | undefined,
  ) {
    this.correlations = memory?.correlations ?? new Correlations();
    this.statistics = memory?.statistics ?? new StatisticsCache();
    this.given = new GivenStore(input.given ?? [], memory?.given);
    this.store = new TraceStore(input.traces, memory?.traces, {
      correlations: this.correlations,
      statistics: this.statistics,
    });
  }

  run(): Sheet {
    const { cells } = this.input;
    for (const cell of cells) this.lines.push(this.parse(cell.source));
    const refusals = this.define();
    const { sequence, circles } = order(this.lines.map(({ line }) => (line ? this.reading(line) : [])));
    for (const circle of circles) {
      const names = circle.map((number) => `\`${this.lines[number]?.line?.symbol ?? ''}\``);
      const message =
        names.length === 1
          ? `${names[0] ?? ''} is calculated from itself: write it without its own symbol.`
          : `${names.slice(0, -1).join(', ')} and ${names.at(-1) ?? ''} are calculated from one another in a circle: one of them has to be written without the others.`;
      for (const number of circle) refusals.set(number, new Refusal('circle', message));
    }
    for (const number of sequence) this.byNumber[number] = this.outcome(number, refusals.get(number) ?? null);
    return this.sheet();
  }

  private sheet(): Sheet {
    const results = new Map<string, ValueResult>();
    const columns = new Map<string, DerivedColumn>();
    this.input.cells.forEach((cell, number) => {
      const outcome = this.byNumber[number];
      if (!outcome) return;
      results.set(cell.id, outcome.result);
      this.outcomes.set(cell.id, outcome);
      if (outcome.derived) columns.set(outcome.derived.symbol, outcome.derived);
    });
    const sheet: Sheet = { engine: engineVersion, results, columns };
    const { parsed, outcomes, correlations, statistics } = this;
    memories.set(sheet, {
      parsed,
      outcomes,
      traces: this.store.stored,
      given: this.given.kept,
      correlations,
      statistics,
    });
    return sheet;
  }

  private parse(source: string): Parsed {
    const parsed = this.parsed.get(source) ?? this.memory?.parsed.get(source) ?? parseCell(source);
    this.parsed.set(source, parsed);
    return parsed;
  }

  /** Symbols to lines; a symbol that two lines define is an error of both, for which of them holds is not known. */
  private define(): Map<number, Refusal> {
    const refusals = new Map<number, Refusal>();
    if (this.lines.length > mostCells) {
      for (let number = mostCells; number < this.lines.length; number++) {
        refusals.set(number, new Refusal('too-large', `An entry calculates at most ${mostCells} values.`));
      }
    }
    const definitions = new Map<string, number[]>();
    this.lines.forEach(({ line }, number) => {
      if (line) definitions.set(line.symbol, [...(definitions.get(line.symbol) ?? []), number]);
    });
    for (const [symbol, numbers] of definitions) {
      for (const number of numbers) {
        if (numbers.length > 1) {
          refusals.set(
            number,
            new Refusal(
              'defined-twice',
              `\`${symbol}\` is given a value in ${numbers.length} lines: keep one of them, or choose another symbol.`,
            ),
          );
        } else if (this.lines[number]?.line?.column && this.store.fileColumn(symbol)) {
          refusals.set(
            number,
            new Refusal(
              'defined-twice',
              `\`${symbol}\` is a column of the file: choose another name for the one that is calculated.`,
            ),
          );
          continue;
        }
        this.bySymbol.set(symbol, number);
      }
    }
    return refusals;
  }

  private reading(line: Line): number[] {
    const numbers: number[] = [];
    for (const { kind, name } of line.names) {
      const number = kind === 'span' ? undefined : this.bySymbol.get(name);
      if (number !== undefined) numbers.push(number);
    }
    return numbers;
  }

  private outcome(number: number, refusal: Refusal | null): Outcome {
    const cell = this.input.cells[number];
    const { line, refusal: unread } = this.lines[number];
    const stop = refusal ?? unread;
    const before = this.memory?.outcomes.get(cell.id);
    if (stop || !line) {
      const result = failed(cell, line, stop ?? new Refusal('syntax', 'This line cannot be read.'));
      return { cell, quantity: null, result, derived: null, reads: [], work: 0 };
    }
    if (before && this.unchanged(before, cell)) {
      this.work.takeOver(before.work, before.derived?.values.length ?? 0);
      return before;
    }
    return this.calculated(cell, line);
  }

  private unchanged(before: Outcome, cell: CellSource): boolean {
    if (before.cell.source !== cell.source || before.cell.unit !== cell.unit || before.cell.digits !== cell.digits)
      return false;
    // What a sentence says may hang on more than was read: it names near symbols, traces and spans.
    if (before.result.state === 'error') return false;
    return before.reads.every(({ kind, name, answer }) => this.answer(kind, name) === answer);
  }

  /** The present answer to a question, comparable by identity with an earlier one. */
  private answer(kind: Read['kind'], name: string): unknown {
    switch (kind) {
      case 'symbol':
        return this.outcomeOf(name);
      case 'defined':
        return this.bySymbol.has(name);
      case 'column':
        return this.outcomeOf(name) ?? this.given.find(name) ?? this.store.column(name);
      case 'span':
        return this.store.span(name);
    }
  }

  private outcomeOf(symbol: string): Outcome | undefined {
    const number = this.bySymbol.get(symbol);
    return number === undefined ? undefined : this.byNumber[number];
  }

  private calculated(cell: CellSource, line: Line): Outcome {
    const reads: Read[] = [];
    const warnings: string[] = [];
    const start = this.work.done;
    const done = (quantity: Quantity | null, result: ValueResult, derived: DerivedColumn | null = null): Outcome => ({
      cell: { ...cell },
      quantity,
      result,
      derived,
      reads,
      work: this.work.done - start,
    });
    try {
      const quantity = placed(line, calculate(line.tree, this.context(cell, line, reads, warnings)));
      if (quantity.kind === 'scalar') {
        return done(quantity, scalarResult(cell, line, quantity, this.correlations, warnings));
      }
      this.work.keep(quantity.values.length);
      const { result, derived } = columnResult(cell, line, quantity, warnings);
      return done(quantity, result, derived);
    } catch (error) {
      if (error instanceof Pending) return done(null, pendingResult(cell, line));
      return done(null, failed(cell, line, asRefusal(error)));
    }
  }

  private context(cell: CellSource, line: Line, reads: Read[], warnings: string[]): Context {
    const ask = (kind: Read['kind'], name: string): unknown => {
      const answer = this.answer(kind, name);
      reads.push({ kind, name, answer });
      return answer;
    };
    const quantityOf = (name: string, outcome: Outcome): Quantity => {
      if (outcome.quantity) return outcome.quantity;
      if (outcome.result.state === 'pending') throw new Pending(name);
      const code = outcome.result.error?.code ?? 'unknown-name';
      throw new Refusal(code, `\`${name}\` could not be calculated, and ${line.symbol} needs it.`);
    };
    return {
      id: cell.id,
      symbol: line.symbol,
      correlations: this.correlations,
      statistics: this.statistics,
      warn: (sentence) => warnings.push(sentence),
      spend: (amount) => this.work.spend(amount),
      isSymbol: (name) => ask('defined', name) === true,
      symbolValue: (name) => {
        const outcome = ask('symbol', name) as Outcome | undefined;
        if (!outcome) throw unknownName(name, this.input.traces, [...this.bySymbol.keys()]);
        return quantityOf(name, outcome);
      },
      column: (handle, column) => {
        const name = `${handle}.${column}`;
        ask('column', name);
        const outcome = this.outcomeOf(name);
        if (outcome) return quantityOf(name, outcome);
        const given = this.given.find(name);
        return given ? this.given.value(given) : this.store.columnValue(handle, column);
      },
      span: (handle, name) => {
        ask('span', `${handle}.${name}`);
        return this.store.spanRows(handle, name);
      },
    };
  }
}
