import type { Unit } from '@/lib/units/parse';
import type { Shown } from '@/lib/quantity/format';
import { exactDigits, grouped, type Digits } from '@/lib/quantity/digits';
import type { Literal } from './literal';
import type { Expression } from './parse';

/** Typesetting: italic quantity symbols, upright subscripts, functions and units (SI Brochure 5.4; ISO 80000-1, 7). */

const greekLetters = new Map(Object.entries({
  alpha: 'α', beta: 'β', gamma: 'γ', delta: 'δ', epsilon: 'ε', zeta: 'ζ', eta: 'η', theta: 'θ', kappa: 'κ', lambda: 'λ', mu: 'μ',
  nu: 'ν', xi: 'ξ', rho: 'ρ', sigma: 'σ', tau: 'τ', phi: 'φ', chi: 'χ', psi: 'ψ', omega: 'ω', Gamma: 'Γ', Delta: 'Δ', Theta: 'Θ',
  Lambda: 'Λ', Xi: 'Ξ', Sigma: 'Σ', Phi: 'Φ', Psi: 'Ψ', Omega: 'Ω',
})); // prettier-ignore

function parts(name: string): { base: string; below: string } {
  const at = name.indexOf('_', 1);
  if (at < 0 || at === name.length - 1) return { base: name, below: '' };
  return { base: name.slice(0, at), below: name.slice(at + 1).replaceAll('_', ', ') };
}

const letterNames = new Map([...greekLetters].map(([name, letter]) => [letter, name]));

function baseTex(base: string): string {
  const name = greekLetters.has(base) ? base : letterNames.get(base);
  if (name !== undefined) return `\\${name}`;
  return [...base].length === 1 ? base : `\\mathit{${base.replaceAll('_', '\\_')}}`;
}

/** TeX of a symbol (`P_{\mathrm{esc}}`) or a column (`\mathrm{t1}.P`). */
export function symbolTex(name: string): string {
  const dot = name.indexOf('.');
  if (dot >= 0) return `\\mathrm{${name.slice(0, dot).replaceAll('_', '\\_')}}.${symbolTex(name.slice(dot + 1))}`;
  const { base, below } = parts(name);
  return baseTex(base) + (below ? `_{\\mathrm{${below.replaceAll(' ', '\\,')}}}` : '');
}

const markup: Record<string, string> = { '&': '&amp;', '<': '&lt;', '>': '&gt;', '"': '&quot;' };
const escaped = (text: string): string => text.replace(/[&<>"]/g, (character) => markup[character] ?? character);

/** MathML of a symbol or a column. */
export function symbolMathml(name: string): string {
  const dot = name.indexOf('.');
  if (dot >= 0) {
    return `<mi mathvariant="normal">${escaped(name.slice(0, dot))}</mi><mo>.</mo>${symbolMathml(name.slice(dot + 1))}`;
  }
  const { base, below } = parts(name);
  const letter = `<mi mathvariant="italic">${escaped(greekLetters.get(base) ?? base)}</mi>`;
  return below ? `<msub>${letter}<mi mathvariant="normal">${escaped(below)}</mi></msub>` : letter;
}

export function unitTex(unit: Unit): string {
  if (unit.text === '') return '';
  const text = unit.text
    .replaceAll('%', '\\%')
    .replace(/√([A-Za-zµΩ]+)/g, '\\sqrt{$1}')
    .replaceAll('Ω', '\\Omega ')
    .replaceAll(' ', '\\,')
    .replace(
      /[⁻⁰¹²³⁴⁵⁶⁷⁸⁹]+/g,
      (raised) => `^{${[...raised].map((c) => (c === '⁻' ? '-' : '⁰¹²³⁴⁵⁶⁷⁸⁹'.indexOf(c))).join('')}}`,
    );
  return `\\mathrm{${text}}`;
}

function numberTex(digits: Digits): string {
  const sign = digits.negative ? '-' : '';
  const last = digits.last === null ? '' : `(${digits.last})`;
  const power = digits.exponent === 0 ? '' : `\\times 10^{${digits.exponent}}`;
  return `${sign}${grouped(digits.number, '\\,')}${last}${power}`;
}

function literalTex(literal: Literal): string {
  const number = literal.text.replace(/[^\d.()+\-−eE×^⁺⁻⁰¹²³⁴⁵⁶⁷⁸⁹\s].*$/u, '').trim();
  const plain = /^[-−]?[\d.]+(?:\(\d+\))?$/.test(number)
    ? number.replace('−', '-')
    : numberTex(exactDigits(literal.number));
  const shown = /^[-−]?\d/.test(plain) ? plain : numberTex(exactDigits(literal.number));
  const stated =
    literal.u !== null && !shown.includes('(')
      ? `(${shown}\\pm ${numberTex(exactDigits(Number(literal.u.toPrecision(6))))})`
      : shown;
  return literal.unit && literal.unit.text !== '' ? `${stated}\\,${unitTex(literal.unit)}` : stated;
}

const constantTex: Record<string, string> = {
  e: 'e',
  h: 'h',
  hbar: '\\hbar',
  k_B: 'k_{\\mathrm{B}}',
  c_0: 'c_{0}',
  pi: '\\mathrm{\\pi}',
};

const functionTex: Record<string, string> = {
  ln: '\\ln',
  exp: '\\exp',
  sin: '\\sin',
  cos: '\\cos',
  tan: '\\tan',
  min: '\\min',
  max: '\\max',
};

const strength = (node: Expression): number => {
  if (node.kind === 'binary') return node.operator === '^' ? 4 : node.operator === '*' || node.operator === '/' ? 2 : 1;
  return node.kind === 'negative' ? 1 : 5;
};

/** TeX of an expression, fractions built up. */
export function expressionTex(node: Expression): string {
  const inBrackets = (child: Expression, atLeast: number) =>
    strength(child) < atLeast ? `\\left(${expressionTex(child)}\\right)` : expressionTex(child);
  switch (node.kind) {
    case 'literal':
      return literalTex(node.literal);
    case 'constant':
      return constantTex[node.name] ?? node.name;
    case 'symbol':
      return symbolTex(node.name);
    case 'column':
      return symbolTex(`${node.handle}.${node.name}`);
    case 'span':
      return `\\mathrm{${node.name.replaceAll('_', '\\_')}}`;
    case 'negative':
      return `-${inBrackets(node.of, 2)}`;
    case 'binary': {
      const { operator, left, right } = node;
      if (operator === '/') return `\\frac{${expressionTex(left)}}{${expressionTex(right)}}`;
      if (operator === '^') return `${inBrackets(left, 5)}^{${expressionTex(right)}}`;
      if (operator === '*')
        return `${inBrackets(left, 2)}\\,${inBrackets(right, 2)}`.replace(/(\d)\\,(\d)/, '$1\\cdot $2');
      return `${expressionTex(left)}${operator}${inBrackets(right, 2)}`;
    }
    case 'call': {
      const [first] = node.of;
      if (node.name === 'sqrt' && first) return `\\sqrt{${expressionTex(first)}}`;
      if (node.name === 'abs' && first) return `\\left|${expressionTex(first)}\\right|`;
      const name = node.name === 'log10' ? '\\log_{10}' : (functionTex[node.name] ?? `\\operatorname{${node.name}}`);
      const given = node.of.map(expressionTex);
      if (node.unit) given.splice(1, 0, unitTex(node.unit));
      return `${name}\\left(${given.join(', ')}\\right)`;
    }
  }
}

/** The expression as a line of text, for sentences. At most 60 characters. */
export function expressionText(node: Expression): string {
  return shortened(plainText(node));
}

export function shortened(text: string): string {
  return text.length > 60 ? `${text.slice(0, 57)}…` : text;
}

/** The whole expression as a line of text; different expressions have different texts. */
export function plainText(node: Expression): string {
  const inBrackets = (child: Expression, atLeast: number) =>
    strength(child) < atLeast ? `(${plainText(child)})` : plainText(child);
  switch (node.kind) {
    case 'literal':
      return node.literal.text;
    case 'constant':
    case 'symbol':
    case 'span':
      return node.name;
    case 'column':
      return `${node.handle}.${node.name}`;
    case 'negative':
      return `−${inBrackets(node.of, 2)}`;
    case 'binary': {
      const { operator, left, right } = node;
      const own = strength(node);
      const sign = operator === '+' || operator === '-' ? ` ${operator} ` : operator;
      // Powers are read from the right, − and / from the left.
      const beside = operator === '^' ? 5 : own;
      const behind = operator === '-' || operator === '/' ? own + 1 : own;
      return inBrackets(left, beside) + sign + inBrackets(right, behind);
    }
    case 'call': {
      const given = node.of.map(plainText);
      if (node.unit) given.splice(1, 0, node.unit.text);
      return `${node.name}(${given.join(', ')})`;
    }
  }
}

/** `symbol = result` as MathML, unit upright behind a thin space. */
export function resultMathml(symbolMathml: string, shown: Shown): string {
  const { digits, unit } = shown;
  const sign = digits.negative ? '<mo form="prefix">−</mo>' : '';
  const number = `<mn>${grouped(digits.number, '\u2009')}${digits.last === null ? '' : `(${digits.last})`}</mn>`;
  const power =
    digits.exponent === 0
      ? ''
      : `<mo>×</mo><msup><mn>10</mn><mn>${String(digits.exponent).replace('-', '−')}</mn></msup>`;
  const withUnit =
    unit.text === '' ? '' : `<mspace width="0.167em"/><mi mathvariant="normal">${escaped(unit.text)}</mi>`;
  return `<math><mrow>${symbolMathml}<mo>=</mo>${sign}${number}${power}${withUnit}</mrow></math>`;
}

/** `symbol = words`, for a column. */
export function wordsMathml(symbolMathml: string, words: string): string {
  return `<math><mrow>${symbolMathml}<mo>=</mo><mtext>${escaped(words)}</mtext></mrow></math>`;
}
