import { create, parseDependencies } from 'mathjs/number';
import { Refusal } from '@/lib/errors/refusal';
import type { Unit } from '@/lib/units/parse';
import type { Literal } from './literal';
import { columnFunctions, constantNames, functionNames, limits } from './names';
import { scanExpression, scanLine, type Scanned } from './scan';
import { expressionTex, symbolMathml, symbolTex } from './typeset';

/** What a line may consist of; nothing else comes out of the parser's tree. */
export type Expression =
  | { kind: 'literal'; place: number; literal: Literal }
  | { kind: 'constant'; name: string }
  | { kind: 'symbol'; name: string }
  | { kind: 'column'; handle: string; name: string }
  | { kind: 'span'; name: string }
  | { kind: 'negative'; of: Expression }
  | { kind: 'binary'; operator: '+' | '-' | '*' | '/' | '^'; left: Expression; right: Expression }
  | { kind: 'call'; name: string; of: Expression[]; unit: Unit | null };

export type Line = Scanned & {
  tree: Expression;
  /** Names in order of use, each once: symbols, `t1.I`, and the words that may be spans. */
  names: readonly { kind: 'symbol' | 'column' | 'span'; name: string }[];
  /** The same as plain text. */
  dependsOn: string[];
  /** Typeset once, when the line is read. */
  tex: { symbol: string; expression: string; symbolMathml: string };
};

// Only the parser is taken from the library: none of its functions, units or constants exist here, and nothing of its
// evaluation is ever called. Our own walk copies the tree node by node from an allow-list.
const { parse } = create({ parseDependencies });

type ParsedNode = { type: string } & Record<string, unknown>;

/** Reads `symbol = expression`. Throws a Refusal. */
export function parseLine(source: string): Line {
  const scanned = scanLine(source);
  const { tree, names } = treeOf(scanned.expression, scanned.places);
  const { symbol } = scanned;
  const tex = { symbol: symbolTex(symbol), expression: expressionTex(tree), symbolMathml: symbolMathml(symbol) };
  return { ...scanned, tree, names, dependsOn: names.map(({ name }) => name), tex };
}

/** Reads an expression by itself, as a stated quantity may be. */
export function parseExpression(text: string): Pick<Line, 'tree' | 'names'> {
  if (text.length > limits.length) throw new Refusal('too-large', `At most ${limits.length} characters are read here.`);
  const { expression, places } = scanExpression(text);
  return treeOf(expression, places);
}

function treeOf(expression: string, places: readonly (Literal | Unit)[]): Pick<Line, 'tree' | 'names'> {
  let parsed: unknown;
  try {
    parsed = parse(expression);
  } catch (error) {
    // The scanner has let only names, operators and brackets through; what the parser still refuses is their order.
    if (error instanceof SyntaxError)
      throw new Refusal('syntax', 'This cannot be read as an expression: an operator or a bracket is out of place.');
    if (error instanceof RangeError) throw tooDeep();
    throw error;
  }
  const walk = new Walk(places);
  const tree = walk.node(parsed, 0);
  return { tree, names: walk.names };
}

function tooDeep(): Refusal {
  return new Refusal('too-large', 'This expression is nested too deeply: split it into several values.');
}

function asNode(value: unknown): ParsedNode {
  if (typeof value === 'object' && value !== null && 'type' in value && typeof value.type === 'string')
    return value as ParsedNode;
  throw notAllowed('This');
}

function notAllowed(what: string): Refusal {
  return new Refusal(
    'not-allowed',
    `${what} is not part of an expression here: only +, −, *, /, ^, brackets and the functions listed are.`,
  );
}

const operators = { add: '+', subtract: '-', multiply: '*', divide: '/', pow: '^' } as const;

class Walk {
  readonly names: { kind: 'symbol' | 'column' | 'span'; name: string }[] = [];
  private readonly met = new Set<string>();

  constructor(private readonly places: readonly (Literal | Unit)[]) {}

  node(value: unknown, depth: number): Expression {
    if (depth > limits.depth) throw tooDeep();
    const node = asNode(value);
    switch (node.type) {
      case 'ParenthesisNode':
        return this.node(node.content, depth + 1);
      case 'SymbolNode':
        return this.symbol(String(node.name));
      case 'AccessorNode':
        return this.column(node);
      case 'OperatorNode':
        return this.operator(node, depth);
      case 'FunctionNode':
        return this.call(node, depth);
      default:
        throw notAllowed('What stands here');
    }
  }

  /**
   * A bare name after the first argument of a column's function is a span. `min` and `max` also compare quantities:
   * there only a name after a column, `min(t1.I, on)`, is a span.
   */
  private namesSpan(name: string, given: unknown[]): boolean {
    if ((columnFunctions as readonly string[]).includes(name)) return true;
    return (name === 'min' || name === 'max') && given.length === 2 && asNode(given[0]).type === 'AccessorNode';
  }

  private note(kind: 'symbol' | 'column' | 'span', name: string): void {
    if (this.met.has(name)) return;
    this.met.add(name);
    this.names.push({ kind, name });
  }

  private symbol(name: string): Expression {
    if (name.startsWith('$')) {
      const place = Number(name.slice(1));
      const literal = this.places[place];
      if (!literal || !('number' in literal)) throw notAllowed('A unit by itself');
      return { kind: 'literal', place, literal };
    }
    if (constantNames.has(name)) return { kind: 'constant', name };
    if (functionNames.has(name)) {
      throw new Refusal('syntax', `\`${name}\` is a function: write ${name}(…).`);
    }
    this.note('symbol', name);
    return { kind: 'symbol', name };
  }

  private column(node: ParsedNode): Expression {
    const object = asNode(node.object);
    const index = asNode(node.index);
    const [first, ...more] = Array.isArray(index.dimensions) ? (index.dimensions as unknown[]) : [];
    const key = first === undefined ? null : asNode(first);
    if (
      object.type !== 'SymbolNode' ||
      key?.type !== 'ConstantNode' ||
      typeof key.value !== 'string' ||
      more.length > 0
    ) {
      throw notAllowed('A name with more than one point');
    }
    const [handle, name] = [String(object.name), key.value];
    this.note('column', `${handle}.${name}`);
    return { kind: 'column', handle, name };
  }

  private operator(node: ParsedNode, depth: number): Expression {
    const of = Array.isArray(node.args) ? (node.args as unknown[]) : [];
    const [left, right] = of;
    if (node.fn === 'unaryMinus' && of.length === 1) return { kind: 'negative', of: this.node(left, depth + 1) };
    if (node.fn === 'unaryPlus' && of.length === 1) return this.node(left, depth + 1);
    if (node.implicit === true || of.length !== 2) throw notAllowed('A product without *');
    for (const [fn, operator] of Object.entries(operators)) {
      if (fn === node.fn) {
        return { kind: 'binary', operator, left: this.node(left, depth + 1), right: this.node(right, depth + 1) };
      }
    }
    throw notAllowed('This operator');
  }

  private call(node: ParsedNode, depth: number): Expression {
    const fn = asNode(node.fn);
    if (fn.type !== 'SymbolNode' || typeof fn.name !== 'string' || !functionNames.has(fn.name))
      throw notAllowed('This function');
    const name = fn.name;
    const of: Expression[] = [];
    let unit: Unit | null = null;
    const given = Array.isArray(node.args) ? (node.args as unknown[]) : [];
    given.forEach((argument, i) => {
      const inner = asNode(argument);
      if (name === 'convert' && i === 1) {
        const place = inner.type === 'SymbolNode' ? this.places[Number(String(inner.name).slice(1))] : undefined;
        if (!place || !('factors' in place)) throw notAllowed('A unit that is calculated');
        unit = place;
      } else if (
        i > 0 &&
        inner.type === 'SymbolNode' &&
        !String(inner.name).startsWith('$') &&
        this.namesSpan(name, given)
      ) {
        this.note('span', String(inner.name));
        of.push({ kind: 'span', name: String(inner.name) });
      } else {
        of.push(this.node(argument, depth + 1));
      }
    });
    return { kind: 'call', name, of, unit };
  }
}
