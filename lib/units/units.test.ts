import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { Refusal } from '@/lib/errors/refusal';
import { fromUnit, inUnit, readableUnit, unitFor } from './choose';
import { dimensionless, multiplyDimensions, raiseDimension, sameDimension } from './dimension';
import { parseUnit } from './parse';
import { nearUnits, unitAtoms } from './table';

const refusal = (text: string): Refusal => {
  try {
    parseUnit(text);
  } catch (error) {
    if (error instanceof Refusal) return error;
    throw error;
  }
  throw new Error(`${text} was read.`);
};

describe('units', () => {
  // SI Brochure, 9th edition, tables 4 (named units), 7 (prefixes), 8 (accepted units).
  it.each([
    ['pA', 1e-12],
    ['aA', 1e-18],
    ['µV', 1e-6],
    ['uV', 1e-6],
    ['μV', 1e-6],
    ['GΩ', 1e9],
    ['kohm', 1e3],
    ['MHz', 1e6],
    ['mbar', 1e2],
    ['hPa', 1e2],
    ['min', 60],
    ['h', 3600],
    ['kg', 1],
    ['g', 1e-3],
    ['mg', 1e-6],
    ['%', 1e-2],
    ['ppm', 1e-6],
    ['eV', 1.602176634e-19],
    ['meV', 1.602176634e-22],
    ['deg', Math.PI / 180],
    ['1/s', 1],
    ['mm', 1e-3],
    ['ms', 1e-3],
    ['cm', 1e-2],
  ])('%s is %d coherent units', (text, factor) => {
    expect(parseUnit(text).factor).toBe(factor);
  });

  it.each([
    ['V/A', 'Ω'],
    ['A/V', 'S'],
    ['C/s', 'A'],
    ['J/C', 'V'],
    ['A s', 'C'],
    ['V·A', 'W'],
    ['1/s', 'Hz'],
    ['kg m^2 s^-2', 'J'],
    ['kg·m²·s⁻²', 'J'],
    ['N/m^2', 'Pa'],
    ['V s', 'Wb'],
    ['Wb/m²', 'T'],
    ['Wb/A', 'H'],
    ['C/V', 'F'],
    ['V/(A s)', 'Ω/s'],
    ['nV/Hz^0.5', 'V/√Hz'],
    ['fA/sqrt(Hz)', 'A/√Hz'],
    ['A^(1/2)', '√A'],
  ])('%s has the dimension of %s', (a, b) => {
    expect(parseUnit(a).dimension).toEqual(parseUnit(b).dimension);
  });

  it('names an unknown unit and near ones', () => {
    expect(refusal('mhz').message).toContain('mHz');
    expect(refusal('mhz').message).toContain('MHz');
    expect(refusal('foo').code).toBe('unknown-unit');
    expect(refusal('foo').message).toContain('`foo`');
    expect(nearUnits('kohn')).toContain('kohm');
  });

  it.each(['V/A s', 'V/A/s', 'V//A', 'V/', '', ' ', '(V', 'V)', '2 V', 'V^', '__proto__', 'constructor', 'V^99'])(
    'refuses %j with a sentence',
    (text) => {
      expect(refusal(text).message).toMatch(/\.$/);
    },
  );

  it('has no prefix where a unit takes none, and no compound of °C or dBm', () => {
    for (const text of ['kmin', 'm%', 'kppm', 'm°C', 'kh']) expect(refusal(text).code).toBe('unknown-unit');
    expect(refusal('°C/s').code).toBe('unit-clash');
    expect(refusal('dBm/Hz').code).toBe('unit-clash');
    expect(refusal('V °C').message).toContain('K');
  });

  it('reads what it writes', () => {
    const atoms = unitAtoms.filter(({ scale, symbol }) => scale === 'linear' && !['%', 'rad', 'deg'].includes(symbol));
    const factor = fc.tuple(
      fc.constantFrom(...atoms),
      fc.constantFrom('', 'p', 'µ', 'm', 'k', 'G'),
      fc.constantFrom(1, 2, -1, -2, 0.5),
    );
    fc.assert(
      fc.property(fc.array(factor, { minLength: 1, maxLength: 3 }), (factors) => {
        const text = factors
          .map(([atom, prefix, exponent]) => `${atom.prefixes ? prefix : ''}${atom.symbol}^${exponent}`)
          .join(' ');
        const unit = parseUnit(text);
        const again = parseUnit(unit.text);
        expect(again.dimension).toEqual(unit.dimension);
        expect(Math.abs(again.factor / unit.factor - 1)).toBeLessThan(1e-12);
      }),
    );
  });

  it('converts there and back', () => {
    fc.assert(
      fc.property(
        fc.double({ noNaN: true, min: -1e9, max: 1e9 }),
        fc.constantFrom('pA', 'fA', 'MHz', 'µs', 'min', 'meV', 'ppm', 'K'),
        (x, name) => {
          const unit = parseUnit(name);
          expect(Math.abs(inUnit(fromUnit(x, unit), unit) - x)).toBeLessThanOrEqual(4e-16 * Math.abs(x) + 1e-300);
        },
      ),
    );
  });
});

describe('dimensions', () => {
  const dimension = fc.constantFrom('A', 'V', 'Ω', 'Hz', 'A/√Hz', 'K', 'J s').map((text) => parseUnit(text).dimension);

  it('form a group under products', () => {
    fc.assert(
      fc.property(dimension, dimension, (a, b) => {
        expect(multiplyDimensions(a, b)).toEqual(multiplyDimensions(b, a));
        expect(sameDimension(multiplyDimensions(multiplyDimensions(a, b), b, -1), a)).toBe(true);
        expect(sameDimension(raiseDimension(raiseDimension(a, 0.5), 2), a)).toBe(true);
        expect(sameDimension(multiplyDimensions(a, a, -1), dimensionless)).toBe(true);
      }),
    );
  });
});

describe('the unit of a result', () => {
  it.each([
    ['A', 2.966e-14, 'fA'],
    ['A', 1.498e-10, 'pA'],
    ['V/A', 1e9, 'GΩ'],
    ['J/C', 0.2, 'mV'],
    ['1/s', 5e6, '1/s'],
    ['A/√Hz', 2e-15, 'fA/√Hz'],
    ['s', 999.9e-9, 'ns'],
    ['A', 0, 'A'],
  ])('of %s at %d is %s', (dimension, magnitude, text) => {
    expect(readableUnit(parseUnit(dimension).dimension, magnitude, null).text).toBe(text);
  });

  it('keeps what the author wrote while the number reads well in it', () => {
    const hertz = parseUnit('kHz');
    expect(readableUnit(hertz.dimension, 200e3, hertz).text).toBe('kHz');
    expect(readableUnit(hertz.dimension, 9999e3, hertz).text).toBe('kHz');
    expect(readableUnit(hertz.dimension, 0.5e9, hertz).text).toBe('MHz');
  });

  it('finds one for any product of units', () => {
    const factor = fc.tuple(fc.constantFrom('A', 'V', 'Ω', 'K', 's', 'm', 'kg', 'T'), fc.integer({ min: -3, max: 3 }));
    fc.assert(
      fc.property(fc.array(factor, { minLength: 1, maxLength: 4 }), (factors) => {
        const dimension = factors.reduce(
          (product, [name, exponent]) => multiplyDimensions(product, parseUnit(name).dimension, exponent),
          dimensionless,
        );
        expect(sameDimension(unitFor(dimension).dimension, dimension)).toBe(true);
      }),
    );
  });
});
