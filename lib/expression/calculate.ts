import { Refusal } from '@/lib/errors/refusal';
import { negate } from '@/lib/quantity/arithmetic';
import { combine } from '@/lib/quantity/combine';
import { Leaves } from '@/lib/quantity/leaves';
import { plain, type Column, type Quantity, type Scalar } from '@/lib/quantity/quantity';
import { dimensionless } from '@/lib/units/dimension';
import type { Context } from './context';
import { refuseUndetermined } from './determined';
import { integralOf, slopeOf } from './line-statistics';
import { scalarFunctions, statedFunctions } from './names';
import { convert, extremeOfTwo, power, product, quotient, scalarFunction, sum, type Operand } from './operations';
import type { Expression } from './parse';
import { bareNumber, constantValues, statedBy, statedLiteral } from './stated';
import { allRows, countOf, extremeOf, meanOf, medianOf, named, sdOf, type Over } from './statistics';
import { expressionText, plainText } from './typeset';

/** What a literal of a line that was read before states: it is the same at every recalculation. */
const statedBefore = new WeakMap<Expression, { id: string; symbol: string; scalar: Scalar }>();

/** Walks a line's tree. Throws a Refusal, or Pending where samples are not there yet. */
export function calculate(tree: Expression, context: Context): Quantity {
  return new Calculation(tree, context).run();
}

class Calculation {
  private calls = 0;
  private readonly leaves = new Leaves();

  constructor(
    private readonly tree: Expression,
    private readonly context: Context,
  ) {}

  run(): Quantity {
    const result = this.leaves.expand(this.value(this.tree));
    if (result.kind === 'scalar') refuseUndetermined(result);
    return result;
  }

  private operand(node: Expression): Operand {
    return { value: this.value(node), written: () => expressionText(node) };
  }

  private value(node: Expression): Quantity {
    switch (node.kind) {
      case 'literal':
        return this.literal(node);
      case 'constant':
        return node.name === 'pi' ? plain(Math.PI) : (constantValues.get(node.name) as Scalar);
      case 'symbol':
        return this.symbol(node.name);
      case 'column':
        return this.context.column(node.handle, node.name);
      case 'span':
        throw new Refusal(
          'syntax',
          `\`${node.name}\` is read as a span here; spans stand only in mean, sd, median, count, slope and integral.`,
        );
      case 'negative':
        return this.negative(node);
      case 'binary':
        return this.binary(node);
      case 'call':
        return this.call(node);
    }
  }

  private symbol(name: string): Quantity {
    const value = this.context.symbolValue(name);
    // A line that is nothing but a symbol has nothing to gain.
    return value.kind === 'scalar' && this.tree.kind !== 'symbol' ? this.leaves.local(name, value) : value;
  }

  private literal(node: Expression & { kind: 'literal' }): Scalar {
    const { literal, place } = node;
    for (const name of literal.ambiguous) {
      if (name === 'h' || this.context.isSymbol(name)) {
        const other = name === 'h' ? 'the Planck constant' : `the symbol ${name}`;
        const asUnit =
          name === 'h'
            ? `${literal.text.replace(/\/h\b/, '/hour')} for the unit, or `
            : 'convert(…) to state the unit, or ';
        throw new Refusal(
          'syntax',
          `In \`${literal.text}\` it is not clear whether ${name} is a unit or ${other}: write ${asUnit}brackets around the number and its unit for the quotient.`,
        );
      }
    }
    const whole = this.isWhole(place);
    if (!whole && literal.unit === null && literal.u === null && !literal.exactly) return bareNumber(literal);
    const { id, symbol } = this.context;
    const before = statedBefore.get(node);
    if (before?.id === id && before.symbol === symbol) return before.scalar;
    const scalar = statedLiteral(literal, {
      id: `${id}#${place}`,
      label: whole ? symbol : `${literal.text} in ${symbol}`,
    });
    statedBefore.set(node, { id, symbol, scalar });
    return scalar;
  }

  /** Whether the line is nothing but this literal, with or without a sign. */
  private isWhole(place: number): boolean {
    const inner = this.tree.kind === 'negative' ? this.tree.of : this.tree;
    return inner.kind === 'literal' && inner.place === place;
  }

  private negative(node: Expression & { kind: 'negative' }): Quantity {
    const of = this.operand(node.of);
    if (of.value.scale !== 'linear') {
      throw new Refusal(
        'unit-clash',
        `\`${of.written()}\` has no opposite: write the negative number itself, or convert it first.`,
      );
    }
    return negate(of.value, of.value.kind === 'column' ? plainText(node) : '');
  }

  private binary(node: Expression & { kind: 'binary' }): Quantity {
    const left = this.operand(node.left);
    const right = this.operand(node.right);
    const label = () => plainText(node);
    const result =
      node.operator === '+'
        ? sum(left, right, 1, label)
        : node.operator === '-'
          ? sum(left, right, -1, label)
          : node.operator === '*'
            ? product(left, right, label)
            : node.operator === '/'
              ? quotient(left, right, label)
              : power(left, right, label);
    if (result.kind === 'column') this.context.spend(result.values.length * (1 + result.terms.size));
    else if (!Number.isFinite(result.value)) {
      throw new Refusal('too-large', `\`${expressionText(node)}\` is beyond the range of numbers here.`);
    }
    return result;
  }

  private call(node: Expression & { kind: 'call' }): Quantity {
    const { name, of, unit } = node;
    const label = () => plainText(node);
    if ((statedFunctions as readonly string[]).includes(name)) return this.stated(node);
    if ((scalarFunctions as readonly string[]).includes(name)) {
      const result = scalarFunction(name, this.only(node), label);
      if (result.kind === 'scalar' && !Number.isFinite(result.value))
        throw new Refusal('too-large', `\`${expressionText(node)}\` is beyond the range of numbers here.`);
      return result;
    }
    if (name === 'convert') {
      const [first, impedance] = of;
      if (!first || !unit || of.length > 2)
        throw new Refusal('syntax', 'Write convert(x, unit), as in convert(I_on, fA).');
      return convert(this.operand(first), unit, impedance ? this.operand(impedance) : null, label);
    }
    if (name === 'u' || name === 'rel' || name === 'expanded') return this.uncertainty(name, this.only(node));
    if (name === 'min' || name === 'max') {
      const [first] = of;
      if (of.length > 1 && of.at(-1)?.kind !== 'span') return this.extremeOfSeveral(node);
      if (of.length === 1 && first) {
        const alone = this.value(first);
        if (alone.kind === 'scalar')
          throw new Refusal(
            'syntax',
            `${name} compares two or more values, or takes a column: ${name}(a, b), ${name}(t1.I, on).`,
          );
      }
    }
    const found = this.ofColumn(node);
    return node === this.tree ? named(found, this.context.symbol) : found;
  }

  private only(node: Expression & { kind: 'call' }): Operand {
    const [first, ...more] = node.of;
    if (!first || more.length > 0) throw new Refusal('syntax', `${node.name} takes one argument.`);
    return this.operand(first);
  }

  private stated(node: Expression & { kind: 'call' }): Scalar {
    const given = node.of.map((argument) => {
      const value = this.value(argument);
      if (value.kind === 'column') throw new Refusal('not-allowed', `${node.name}(…) takes numbers, not a column.`);
      return value;
    });
    const { id, symbol } = this.context;
    const named = {
      id: `${id}#${node.name}${this.calls++}`,
      label: this.tree === node ? symbol : `${expressionText(node)} in ${symbol}`,
    };
    return statedBy(node.name, given, named, node.of.map(expressionText));
  }

  private uncertainty(name: string, operand: Operand): Scalar {
    const value = this.leaves.expand(operand.value);
    if (value.kind === 'column') {
      throw new Refusal(
        'not-allowed',
        `${name} takes a single value; \`${operand.written()}\` is a column. Take its mean first.`,
      );
    }
    const combined = combine(value, this.context.correlations);
    const hint = value.scale === 'linear' ? value.hint : null;
    if (name === 'u') return plain(combined.u, value.dimension, hint);
    if (name === 'expanded') {
      if (combined.k === null) {
        throw new Refusal(
          'correlated-dof',
          `The inputs of \`${operand.written()}\` are correlated and their degrees of freedom are finite: no coverage factor is claimed, so there is no expanded uncertainty.`,
        );
      }
      return plain(combined.k * combined.u, value.dimension, hint);
    }
    if (value.scale !== 'linear')
      throw new Refusal(
        'unit-clash',
        `A relative uncertainty of \`${operand.written()}\` means nothing on this scale: convert it first.`,
      );
    if (value.value === 0)
      throw new Refusal('division-by-zero', `\`${operand.written()}\` is 0: it has no relative uncertainty.`);
    return plain(combined.u / Math.abs(value.value), dimensionless);
  }

  private extremeOfSeveral(node: Expression & { kind: 'call' }): Quantity {
    const sign = node.name === 'max' ? 1 : -1;
    const operands = node.of.map((argument) => this.operand(argument));
    return operands.reduce((best, next) => ({
      value: extremeOfTwo(best, next, sign, () => plainText(node)),
      written: () => expressionText(node),
    })).value;
  }

  private columnOf(node: Expression, name: string): Column {
    const value = this.value(node);
    if (value.kind === 'scalar') {
      throw new Refusal(
        'syntax',
        `${name} is taken of a column, as in ${name}(t1.I, on); \`${expressionText(node)}\` is a single value.`,
      );
    }
    return value;
  }

  private ofColumn(node: Expression & { kind: 'call' }): Scalar {
    const { name, of } = node;
    const [first] = of;
    if (!first) throw new Refusal('syntax', `${name} needs a column, as in ${name}(t1.I, on).`);
    const column = this.leaves.expand(this.columnOf(first, name));
    const last = of.at(-1);
    const span = last?.kind === 'span' ? this.context.span(column.handle, last.name) : null;
    const over: Over = span ?? allRows(column);
    const between = of.slice(1, span ? -1 : undefined);
    const { statistics, warn } = this.context;
    this.context.spend(column.values.length * (4 + column.terms.size));
    if (name === 'slope' || name === 'integral') {
      const [against, ...more] = between;
      if (more.length > 0)
        throw new Refusal('syntax', `Write ${name}(t1.I, t1.V), ${name}(t1.I, t1.V, on) or ${name}(t1.I, on).`);
      const x = against ? this.leaves.expand(this.columnOf(against, name)) : span?.axis();
      if (!x)
        throw new Refusal(
          'syntax',
          `Against what? Write ${name}(t1.I, t1.V), or ${name}(t1.I, on) for the axis of the span.`,
        );
      if (x.handle !== column.handle) throw new Refusal('not-allowed', `${name} needs two columns of one trace.`);
      if (name === 'integral' && (x.scale !== 'linear' || column.scale !== 'linear'))
        throw new Refusal('unit-clash', 'An integral of or over °C or dBm means nothing: convert the column first.');
      if (x.scale === 'level' || column.scale === 'level')
        throw new Refusal(
          'unit-clash',
          'A slope of or against a level in dBm is not taken: convert the column to W first.',
        );
      return name === 'slope' ? slopeOf(column, x, over) : integralOf(column, x, over);
    }
    if (between.length > 0)
      throw new Refusal('syntax', `Write ${name}(t1.I) or ${name}(t1.I, on): the second argument is a span.`);
    if (column.scale === 'level' && name !== 'count')
      throw new Refusal('unit-clash', `\`${column.label}\` is in dBm: convert it to W before taking its ${name}.`);
    switch (name) {
      case 'mean':
        return meanOf(column, over, statistics, warn);
      case 'sd':
        return sdOf(column, over, statistics);
      case 'median':
        return medianOf(column, over, statistics, warn);
      case 'count':
        return countOf(column, over);
      default:
        return extremeOf(column, over, name === 'max' ? 1 : -1, warn);
    }
  }
}
