import katex from 'katex';
import { describe, expect, it } from 'vitest';
import { parseUnit } from '@/lib/units/parse';
import { parseLine } from './parse';
import { expressionTex, plainText, symbolMathml, symbolTex, unitTex } from './typeset';

const tex = (line: string) => expressionTex(parseLine(`y = ${line}`).tree);

describe('typesetting', () => {
  // ISO 80000-1, 7.1: quantity symbols italic, descriptive subscripts upright; 7.2: units upright.
  it.each([
    ['P_esc', 'P_{\\mathrm{esc}}'],
    ['tau', '\\tau'],
    ['alpha_exit', '\\alpha_{\\mathrm{exit}}'],
    ['τ_0', '\\tau_{\\mathrm{0}}'],
    ['I', 'I'],
    ['gap', '\\mathit{gap}'],
    ['I_on_max', 'I_{\\mathrm{on,\\,max}}'],
    ['t1.P_esc', '\\mathrm{t1}.P_{\\mathrm{esc}}'],
  ])('%s is %s', (symbol, expected) => {
    expect(symbolTex(symbol)).toBe(expected);
  });

  it.each([
    ['(I_on - I_off)/(e*f)', '\\frac{I_{\\mathrm{on}}-I_{\\mathrm{off}}}{e\\,f}'],
    ['a - (b - c)', 'a-\\left(b-c\\right)'],
    ['(a + b)*c', '\\left(a+b\\right)\\,c'],
    ['(a*b)^2', '\\left(a\\,b\\right)^{2}'],
    ['sqrt(4*k_B*T/R)', '\\sqrt{\\frac{4\\,k_{\\mathrm{B}}\\,T}{R}}'],
    ['2*3', '2\\cdot 3'],
    ['200 kHz exactly', '200\\,\\mathrm{kHz}'],
    ['149.80(3) pA', '149.80(3)\\,\\mathrm{pA}'],
    ['mean(t1.I, on)', '\\operatorname{mean}\\left(\\mathrm{t1}.I, \\mathrm{on}\\right)'],
    ['convert(I, V/A)', '\\operatorname{convert}\\left(I, \\mathrm{V/A}\\right)'],
  ])('%s is %s', (line, expected) => {
    expect(tex(line)).toBe(expected);
  });

  it('is TeX that KaTeX renders', () => {
    const lines = [
      '149.80 ± 0.03 pA',
      '(149.80 ± 0.03)×10⁻³ pA',
      '1.2e-30 V',
      '5 fA/√Hz',
      '5 nV/Hz^0.5',
      '5 % + 3 ppm',
      '-5 °C',
      '3 kΩ*x',
      'abs(-x)^(1/2)',
      'log10(x_1/x_2)*exp(-t/tau_a)',
      'rectangular(0 V, 2 mV)',
      'slope(t1.I, t1.V_g, on_1)',
      'convert(P, mV, 50 ohm)',
      'my_long_name_1*Omega_c',
      'min(a, b, 3 m²)',
    ];
    for (const line of lines) {
      expect(
        () => katex.renderToString(tex(line), { throwOnError: true, strict: 'error', trust: false }),
        line,
      ).not.toThrow();
    }
    for (const unit of ['pA', 'kΩ', 'V/(A s)', 'fA/√Hz', 'A²/Hz', '%', '1/s', 'm⁻¹ s']) {
      expect(
        () => katex.renderToString(unitTex(parseUnit(unit)), { throwOnError: true, strict: 'error' }),
        unit,
      ).not.toThrow();
    }
  });

  it('escapes what it puts into markup', () => {
    expect(symbolMathml('a<b')).not.toContain('<b');
  });
});

describe('an expression as text', () => {
  it('reads back as the same expression', () => {
    for (const line of [
      'a - (b - c)',
      'a/(b*c)',
      '(a^b)^c',
      'a^(b^c)',
      '-(a + b)*c',
      'mean(t1.I - x, on)/2',
      'a/b/c',
      'a - b + c',
      '-a^2',
      '(-a)^2',
    ]) {
      const tree = parseLine(`y = ${line}`).tree;
      expect(plainText(parseLine(`y = ${plainText(tree)}`).tree)).toBe(plainText(tree));
      expect(expressionTex(parseLine(`y = ${plainText(tree)}`).tree)).toBe(expressionTex(tree));
    }
    expect(plainText(parseLine('y = (a^b)^c').tree)).not.toBe(plainText(parseLine('y = a^(b^c)').tree));
  });
});
