import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { readLiteral } from '@/lib/expression/literal';
import { parseUnit } from '@/lib/units/parse';
import { exactDigits, grouped, uncertainDigits } from './digits';
import { show, writeText } from './format';

const thin = '\u2009';

function written(
  value: number,
  u: number,
  unitText: string,
  options: { fixed?: string; digits?: number; plusMinus?: boolean } = {},
): string {
  const unit = parseUnit(unitText);
  const measured = { value: value * unit.factor, dimension: unit.dimension, scale: unit.scale, hint: unit };
  const wish = { unit: options.fixed ? parseUnit(options.fixed) : null, significant: options.digits ?? null };
  return writeText(show(measured, u * unit.factor, wish), options.plusMinus ? 'plus-minus' : 'concise');
}

describe('writing a quantity', () => {
  // Form: GUM 7.2.2 (concise and ±), 7.2.6 (at most two digits of u); SI Brochure 5.4.3, 5.4.4 (spaces).
  it.each([
    [149.803, 0.028, 'pA', `149.803(28)${thin}pA`],
    [0.9191, 0.0047, '1', '0.9191(47)'],
    [0.02966, 0.00012, 'pA', `29.66(12)${thin}fA`],
    [149, 120, 'pA', `0.15(12)${thin}nA`],
    [5000, 120, 'ohm', `5.00(12)${thin}kΩ`],
    [9.996, 0.12, 'V', `10.00(12)${thin}V`],
    [0, 3, 'fA', `0.0(30)${thin}fA`],
    [-0.0996, 0.95, 'ppm', `−0.10(95)${thin}ppm`],
    [0.001, 1.5, 'V', `0.0(15)${thin}V`],
    [123456.789012, 0.00012, '1/s', `123${thin}456.789${thin}01(12)${thin}1/s`],
    [1.23e9, 1e7, '1/s', `1.230(10)×10⁹${thin}1/s`],
    [1.5e-20, 2e-22, '1', '1.500(20)×10⁻²⁰'],
    [12, 0.5, 'fA/√Hz', `12.00(50)${thin}fA/√Hz`],
  ])('%d ± %d %s reads %s', (value, u, unit, text) => {
    expect(written(value, u, unit)).toBe(text);
  });

  it('takes the author\u2019s unit, digits and the ± form', () => {
    expect(written(149.803, 0.028, 'pA', { fixed: 'fA' })).toBe(`149${thin}803(28)${thin}fA`);
    expect(written(149.803, 0.028, 'pA', { digits: 1 })).toBe(`149.80(3)${thin}pA`);
    expect(written(149.803, 0.028, 'pA', { plusMinus: true })).toBe(`(149.803 ± 0.028)${thin}pA`);
    expect(written(0.9191, 0.0047, '1', { plusMinus: true })).toBe('0.9191 ± 0.0047');
  });

  it.each([
    [0.1 + 0.2, '0.3'],
    [1 / 3, `0.333${thin}333${thin}3`],
    [200, '200'],
    [160.2176634, `160.217${thin}663${thin}4`],
    [2e8, '2×10⁸'],
    [12345678, `12${thin}345${thin}678`],
    [1234, '1234'],
    [-1.5e-7, '−1.5×10⁻⁷'],
    [0, '0'],
  ])('the exact number %d reads %s: never binary noise', (value, text) => {
    expect(written(value, 0, '1')).toBe(text);
  });

  it('groups only sides of more than four digits', () => {
    expect(grouped('1234.5678', ' ')).toBe('1234.5678');
    expect(grouped('12345.67891', ' ')).toBe('12 345.678 91');
  });

  it('rounds a value to the place of its uncertainty, to the nearest', () => {
    const value = fc.double({ min: -1e6, max: 1e6, noNaN: true });
    fc.assert(
      fc.property(value, fc.double({ min: 1e-6, max: 1e3, noNaN: true }), (x, u) => {
        const { negative, number, last, plusMinus, exponent } = uncertainDigits(x, u, 2);
        const scale = 10 ** exponent;
        const read = (negative ? -1 : 1) * Number(number) * scale;
        const place = 10 ** Math.round(Math.log10((Number(plusMinus) * scale) / Number(last)));
        expect(Math.abs(read - x)).toBeLessThanOrEqual(0.5000001 * place + 1e-12 * Math.abs(x));
        expect(last).toMatch(/^[1-9]\d$/);
        expect(Math.abs(Number(plusMinus) * scale - u)).toBeLessThanOrEqual(0.051 * u);
      }),
    );
  });

  it('is read back by the scanner as what was written', () => {
    const units = fc.constantFrom('pA', 'kHz', 'µV', 'V/A', 'K', 'fA/√Hz', 'ppm');
    const value = fc.double({ min: 1e-4, max: 1e5, noNaN: true });
    fc.assert(
      fc.property(
        value,
        fc.double({ min: 1e-5, max: 0.5, noNaN: true }),
        units,
        fc.boolean(),
        (x, relative, name, plusMinus) => {
          const u = x * relative;
          const text = written(x, u, name, { plusMinus });
          const { literal, end } = readLiteral(text, 0);
          expect(end).toBe(text.length);
          const unit = parseUnit(name);
          const back = (number: number) => (number * (literal.unit?.factor ?? NaN)) / unit.factor;
          expect(Math.abs(back(literal.u ?? NaN) / u - 1)).toBeLessThan(0.051);
          expect(Math.abs(back(literal.number) - x)).toBeLessThan(0.051 * u + 1e-12 * x);
        },
      ),
    );
  });

  it('writes exact numbers that are read back to seven digits', () => {
    fc.assert(
      fc.property(fc.double({ min: 1e-12, max: 1e12, noNaN: true }), (x) => {
        const { number, exponent } = exactDigits(x);
        expect(Math.abs(Number(`${number}e${exponent}`) / x - 1)).toBeLessThan(1e-6);
      }),
    );
  });
});
