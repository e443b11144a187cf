import { Refusal } from '@/lib/errors/refusal';
import { parseUnit, superscriptToNumber, type Unit } from '@/lib/units/parse';
import { literalStarts, readLiteral, type Literal } from './literal';
import { constantNames, functionNames, limits, reservedWords } from './names';

/**
 * First reading of a line, before any parser: takes out quantities and the units of `convert`, puts `$0`, `$1` … in
 * their places, and refuses what is not part of a line here. What is left are names, operators, brackets and commas.
 */
export type Scanned = {
  /** `P_esc`, or `t1.P` as handle and column. */
  symbol: string;
  column: { handle: string; name: string } | null;
  /** Right-hand side with placeholders. */
  expression: string;
  places: (Literal | Unit)[];
  /** Right-hand side as typed. */
  typed: string;
};

const symbolPattern = /^[A-Za-zΑ-Ωα-ω][A-Za-z0-9_Α-Ωα-ω]{0,63}$/;
const handlePattern = /^[A-Za-z][A-Za-z0-9_]{0,31}$/;
const namePattern = /[A-Za-zΑ-Ωα-ωµ_][A-Za-z0-9_Α-Ωα-ωµ]*(?:\.[A-Za-zΑ-Ωα-ωµ_][A-Za-z0-9_Α-Ωα-ωµ]*)*/y;
const superscriptPattern = /[⁺⁻]?[⁰¹²³⁴⁵⁶⁷⁸⁹]+/y;
const replacements: Record<string, string> = { '−': '-', '×': '*', '·': '*', '⋅': '*', '÷': '/' };

/** U+00B5 (micro sign) as the Greek letter, in names. */
export function normaliseName(name: string): string {
  return name.replaceAll('µ', 'μ');
}

export function scanLine(source: string): Scanned {
  if (source.length > limits.length) {
    throw new Refusal(
      'too-large',
      `A line is at most ${limits.length} characters long; this one has ${source.length}. Split it into several values.`,
    );
  }
  if (source.trim() === '')
    throw new Refusal('syntax', 'Nothing is written here yet: write symbol = expression, as in I_on = mean(t1.I, on).');
  const at = source.indexOf('=');
  if (at < 0)
    throw new Refusal(
      'syntax',
      'A line gives a symbol its value: write symbol = expression, as in f = 200 kHz exactly.',
    );
  const left = scanLeft(source.slice(0, at).trim());
  const typed = source.slice(at + 1).trim();
  if (typed === '') throw new Refusal('syntax', `What ${left.symbol} is equal to is not written yet.`);
  const { expression, places } = scanExpression(typed);
  return { ...left, expression, places, typed };
}

function scanLeft(text: string): Pick<Scanned, 'symbol' | 'column'> {
  const name = normaliseName(text);
  if (reservedWords.has(name) || functionNames.has(name)) {
    throw new Refusal('not-allowed', `\`${name}\` is a reserved word: choose another symbol.`);
  }
  if (constantNames.has(name)) {
    throw new Refusal('not-allowed', `\`${name}\` is a constant here: choose another symbol, such as ${name}_1.`);
  }
  if (symbolPattern.test(name)) return { symbol: name, column: null };
  const [handle = '', column = '', ...more] = name.split('.');
  if (more.length === 0 && handlePattern.test(handle) && symbolPattern.test(column)) {
    return { symbol: name, column: { handle, name: column } };
  }
  const shown = text.length > 40 ? `${text.slice(0, 40)}…` : text;
  throw new Refusal(
    'syntax',
    `\`${shown}\` cannot be given a value: left of = stands one symbol (letters, digits, _, first a letter) or a column such as t1.P.`,
  );
}

type Before = 'start' | 'operator' | 'operand';

/** Scans an expression without its left-hand side. `loose`: nothing but a quantity is expected (settings). */
export function scanExpression(text: string): { expression: string; places: (Literal | Unit)[] } {
  return new Scanner(text).scan();
}

class Scanner {
  private at = 0;
  private before: Before = 'start';
  private lastOperand = '';
  private readonly out: string[] = [];
  private readonly places: (Literal | Unit)[] = [];
  /** Of each open bracket, the function that it belongs to and the commas met in it. */
  private readonly open: { name: string | null; commas: number }[] = [];

  constructor(private readonly text: string) {}

  scan(): { expression: string; places: (Literal | Unit)[] } {
    while (this.at < this.text.length) this.step();
    const last = this.open.at(-1);
    if (last)
      throw new Refusal(
        'syntax',
        last.name ? `The bracket after ${last.name} is not closed.` : 'A bracket is not closed.',
      );
    if (this.before !== 'operand') {
      throw new Refusal('syntax', `After \`${this.text.trim().slice(-1)}\` something is missing.`);
    }
    return { expression: this.out.join(''), places: this.places };
  }

  private step(): void {
    const character = this.text[this.at] ?? '';
    if (/\s/.test(character)) {
      this.at++;
      return;
    }
    if (literalStarts(this.text, this.at)) return this.literal(false);
    namePattern.lastIndex = this.at;
    const name = namePattern.exec(this.text)?.[0];
    if (name !== undefined) return this.name(name);
    superscriptPattern.lastIndex = this.at;
    const raised = superscriptPattern.exec(this.text)?.[0];
    if (raised !== undefined && this.before === 'operand') {
      this.out.push('^');
      const number = superscriptToNumber(raised);
      this.place({ text: String(number), number, u: null, exactly: false, unit: null, ambiguous: [] });
      this.at += raised.length;
      return;
    }
    if (character === '(') return this.bracket(null);
    if (character === ')') return this.close();
    if (character === ',') return this.comma();
    const operator = replacements[character] ?? character;
    if ('+-*/^'.includes(operator)) return this.operator(operator);
    this.refuse(character);
  }

  private literal(negative: boolean): void {
    const { literal, end } = readLiteral(this.text, this.at);
    this.operand(literal.text);
    this.place(negative ? { ...literal, number: -literal.number, text: `-${literal.text}` } : literal);
    this.at = end;
  }

  private place(what: Literal | Unit): void {
    if (this.places.length >= limits.literals)
      throw new Refusal('too-large', `A line holds at most ${limits.literals} numbers.`);
    this.out.push(`$${this.places.length}`);
    this.places.push(what);
  }

  private operand(shown: string): void {
    if (this.before === 'operand') {
      throw new Refusal(
        'syntax',
        `\`${this.lastOperand} ${shown}\` is not read as a product: write \`${this.lastOperand}*${shown}\`, and below a solidus in brackets, as in I/(e*f).`,
      );
    }
    this.before = 'operand';
    this.lastOperand = shown;
  }

  private name(raw: string): void {
    const name = normaliseName(raw);
    if (reservedWords.has(name)) {
      throw new Refusal(
        'not-allowed',
        `\`${name}\` is a reserved word${name === 'exactly' ? ': it stands after a number and its unit' : ' and does nothing here'}.`,
      );
    }
    if (name.split('.').some((part) => part.startsWith('_'))) {
      throw new Refusal('syntax', `\`${raw}\`: names begin with a letter.`);
    }
    const next = /^\s*\(/.exec(this.text.slice(this.at + raw.length));
    if (next && functionNames.has(name)) {
      this.operand(`${name}(…)`);
      this.at += raw.length + next[0].length - 1;
      this.out.push(name);
      this.before = 'start';
      return this.bracket(name);
    }
    if (next && this.text[this.at + raw.length] === '(') {
      throw new Refusal(
        'not-allowed',
        `\`${raw}\` is not a function here. For a product write ${raw}*(…). Functions: ${[...functionNames].join(', ')}.`,
      );
    }
    this.operand(raw);
    this.out.push(name);
    this.at += raw.length;
  }

  private bracket(name: string | null): void {
    if (name === null) {
      this.operand('(…)');
      this.before = 'start';
    }
    if (this.open.length >= limits.brackets) {
      throw new Refusal('too-large', `Brackets are nested at most ${limits.brackets} deep.`);
    }
    this.open.push({ name, commas: 0 });
    this.out.push('(');
    this.at++;
  }

  private close(): void {
    const open = this.open.pop();
    if (!open) throw new Refusal('syntax', 'A bracket is closed that was not opened.');
    if (this.before !== 'operand')
      throw new Refusal(
        'syntax',
        open.name ? `${open.name}(…) lacks what stands in its brackets.` : 'Something is missing before `)`.',
      );
    this.out.push(')');
    this.at++;
    this.lastOperand = open.name ? `${open.name}(…)` : '(…)';
  }

  private comma(): void {
    const open = this.open.at(-1);
    if (!open || open.name === null) {
      throw new Refusal(
        'syntax',
        'A comma stands only between the arguments of a function; the decimal sign is a point.',
      );
    }
    if (this.before !== 'operand') throw new Refusal('syntax', 'Something is missing before the comma.');
    open.commas++;
    this.out.push(',');
    this.at++;
    this.before = 'start';
    if (open.name === 'convert' && open.commas === 1) this.convertUnit();
  }

  /** The second argument of `convert` is a unit, up to the next comma or the closing bracket. */
  private convertUnit(): void {
    let depth = 0;
    let end = this.at;
    for (; end < this.text.length; end++) {
      const character = this.text[end];
      if (character === '(') depth++;
      else if (character === ')' && depth-- === 0) break;
      else if (character === ',' && depth === 0) break;
    }
    const unit = parseUnit(this.text.slice(this.at, end).trim());
    this.operand(unit.text);
    this.place(unit);
    this.at = end;
  }

  private operator(operator: string): void {
    const sign = operator === '+' || operator === '-';
    if (this.before !== 'operand' && !sign) {
      throw new Refusal(
        'syntax',
        operator === '*' && this.text[this.at - 1] === '*'
          ? 'A power is written with ^, as in x^2.'
          : `Something is missing before \`${operator}\`.`,
      );
    }
    if (operator === '-' && this.before === 'start' && this.negativeOffScale()) return;
    this.out.push(operator);
    this.at++;
    this.before = 'operator';
  }

  /** −5 °C and −10 dBm are numbers of their own, not the opposite of 5 °C. */
  private negativeOffScale(): boolean {
    const start = this.at + 1 + (/^\s*/.exec(this.text.slice(this.at + 1))?.[0].length ?? 0);
    if (!literalStarts(this.text, start) || this.text[start] === '(') return false;
    const { literal } = readLiteral(this.text, start);
    if (!literal.unit || literal.unit.scale === 'linear') return false;
    this.at = start;
    this.literal(true);
    return true;
  }

  private refuse(character: string): never {
    const hint: Record<string, string> = {
      '=': 'One line gives one symbol its value.',
      '[': 'Columns come from traces; lists are not written here.',
      '{': 'Only ordinary brackets are used.',
      '"': 'Text is not part of an expression.',
      "'": 'Text is not part of an expression.',
      ';': 'Each value has a line of its own.',
      '%': 'Per cent stands after a number, as in 5 %.',
      '±': 'An uncertainty follows a number and its unit, as in 149.80 pA ± 0.03 pA.',
    };
    throw new Refusal(
      'not-allowed',
      `\`${character}\` is not part of an expression here. ${hint[character] ?? ''}`.trim(),
    );
  }
}
