import { describe, expect, it } from 'vitest';
import { Refusal } from '@/lib/errors/refusal';
import type { Literal } from './literal';
import { parseLine } from './parse';
import { scanLine } from './scan';

function literal(text: string): Literal {
  const [place] = scanLine(`x = ${text}`).places;
  if (!place || !('number' in place)) throw new Error(`${text} is no literal`);
  return place;
}

function refusal(line: string): Refusal {
  try {
    parseLine(line);
  } catch (error) {
    if (error instanceof Refusal) return error;
    throw error;
  }
  throw new Error(`${line} was read.`);
}

describe('quantities as typed', () => {
  // Forms of GUM 7.2.2; what stands after ± is a standard uncertainty.
  it.each([
    ['149.80(3) pA', 149.8, 0.03, 'pA'],
    ['149.80 ± 0.03 pA', 149.8, 0.03, 'pA'],
    ['(149.80 ± 0.03) pA', 149.8, 0.03, 'pA'],
    ['149.80 pA ± 0.2 %', 149.8, 0.2996, 'pA'],
    ['149.80 pA ± 50 ppm', 149.8, 0.00749, 'pA'],
    ['149.80 pA ± 30 fA', 149.8, 0.03, 'pA'],
    ['149.80 pA +/- 0.03 pA', 149.8, 0.03, 'pA'],
    ['149.80 ± 0.06 pA (k = 2)', 149.8, 0.03, 'pA'],
    ['149.8(1.2) pA', 149.8, 1.2, 'pA'],
    ['1.234(5)e-3 V', 1.234e-3, 5e-6, 'V'],
    ['1.230(10)×10⁹ 1/s', 1.23e9, 1e7, '1/s'],
    ['(1.230 ± 0.010)×10^9 1/s', 1.23e9, 1e7, '1/s'],
    ['149\u2009803(28) fA', 149803, 28, 'fA'],
    ['1e9 V/A ± 50 ppm', 1e9, 5e4, 'V/A'],
    ['21.50(10) °C', 21.5, 0.1, '°C'],
    ['0.92(5)', 0.92, 0.05, undefined],
  ])('%s', (text, number, u, unit) => {
    const read = literal(text);
    expect(read.number).toBeCloseTo(number, 12);
    expect(Math.abs((read.u ?? NaN) / u - 1)).toBeLessThan(1e-12);
    expect(read.unit?.text).toBe(unit);
  });

  it.each([
    ['1.2e-3 V', 1.2e-3, 'V', false],
    ['20 MHz exactly', 20, 'MHz', true],
    ['5e6 1/s', 5e6, '1/s', false],
    ['.5 V', 0.5, 'V', false],
    ['3 V/(A s)', 3, 'V/(A s)', false],
    ['5 fA/√Hz', 5, 'fA/√Hz', false],
    ['5 nV/Hz^0.5', 5, 'nV/√Hz', false],
    ['-10 dBm', -10, 'dBm', false],
    ['−5 °C', -5, '°C', false],
    ['2 h', 2, 'h', false],
  ])('%s has no uncertainty', (text, number, unit, exactly) => {
    const read = literal(text);
    expect(read).toMatchObject({ number, u: null, exactly });
    expect(read.unit?.text).toBe(unit);
  });

  it.each([
    ['x = 5 ± 0.2 %', 'unit-clash'],
    ['x = 5 pA ± 0.2', 'unit-clash'],
    ['x = 5 pA ± 2 mV', 'unit-clash'],
    ['x = 20 °C ± 1 %', 'unit-clash'],
    ['x = 5(1) pA ± 2 pA', 'syntax'],
    ['x = 5(1) pA exactly', 'syntax'],
    ['x = 5 pA ±', 'syntax'],
    ['x = 1e400 V', 'too-large'],
    ['x = 5 foo', 'unknown-unit'],
  ])('%s is refused as %s', (line, code) => {
    expect(refusal(line).code).toBe(code);
    expect(refusal(line).message).toMatch(/[.)]$/);
  });
});

describe('products', () => {
  it.each([
    ['n = I/e f', '`e*f`'],
    ['x = 2 e', '`2*e`'],
    ['x = 2 pi', '`2*pi`'],
    ['x = a b', '`a*b`'],
    ['x = (a)(b)', '*'],
    ['x = 2(a)', '*'],
    ['x = a(b)', '*'],
    ['x = 3 k_B', '`3*k_B`'],
    ['x = 2 x', '2*x'],
  ])('%s asks for the *', (line, shown) => {
    expect(refusal(line).message).toContain(shown);
  });

  it('takes a solidus into the unit only where it is written tight', () => {
    const { expression, places } = scanLine('x = 5 V/A + 5 V / A');
    expect(expression).toBe('$0+$1/A');
    expect(places.map((place) => ('unit' in place ? place.unit?.text : null))).toEqual(['V/A', 'V']);
  });

  it('leaves unit names free as symbols', () => {
    for (const symbol of ['T', 'A', 'V', 'C', 'F', 'm', 's', 'K', 'min_1']) {
      expect(parseLine(`${symbol} = 2*${symbol}_0`).symbol).toBe(symbol);
    }
  });
});

describe('what is no line', () => {
  it.each([
    ['', 'syntax'],
    ['f', 'syntax'],
    ['f =', 'syntax'],
    ['f = (', 'syntax'],
    ['f = )', 'syntax'],
    ['f = 2 +', 'syntax'],
    ['f = * 2', 'syntax'],
    ['f = a**b', 'syntax'],
    ['f = mean(', 'syntax'],
    ['f = mean()', 'syntax'],
    ['f = 1, 2', 'syntax'],
    ['f = 1,5', 'syntax'],
    ['f = a == b', 'not-allowed'],
    ['f = g = 2', 'not-allowed'],
    ['f(x) = x', 'syntax'],
    ['2 = x', 'syntax'],
    ['e = 3', 'not-allowed'],
    ['h = 3', 'not-allowed'],
    ['mean = 3', 'not-allowed'],
    ['in = 3', 'not-allowed'],
    ['t1.P.Q = 3', 'syntax'],
    ['f = a.b.c', 'not-allowed'],
    ['f = [1, 2]', 'not-allowed'],
    ['f = {a: 1}', 'not-allowed'],
    ['f = "x"', 'not-allowed'],
    ["f = a'", 'not-allowed'],
    ['f = 5!', 'not-allowed'],
    ['f = a mod b', 'not-allowed'],
    ['f = a to b', 'not-allowed'],
    ['f = a > b', 'not-allowed'],
    ['f = a ? b : c', 'not-allowed'],
    ['f = a; b', 'not-allowed'],
    ['f = $0', 'not-allowed'],
    ['f = sqrt', 'syntax'],
    ['f = gamma(2)', 'not-allowed'],
    ['f = not a', 'not-allowed'],
  ])('%j is refused as %s', (line, code) => {
    expect(refusal(line).code).toBe(code);
    expect(refusal(line).message.length).toBeGreaterThan(20);
  });
});
