import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { cellsOf } from './example-trace';
import type { ValueResult } from './contract';
import { engineVersion } from './engine';
import { evaluateSheet } from './evaluate';

const thin = '\u2009';

function sheetOf(...lines: string[]): (symbol: string) => ValueResult {
  const sheet = evaluateSheet({ cells: cellsOf(lines), traces: [] });
  return (symbol) => {
    const found = [...sheet.results.values()].find((result) => result.symbol === symbol);
    if (!found) throw new Error(`no ${symbol}`);
    return found;
  };
}

const y = (line: string, ...before: string[]): ValueResult => sheetOf(...before, `y = ${line}`)('y');

describe('values', () => {
  it.each([
    ['1 + 2*3', '7'],
    ['-2^2', '−4'],
    ['2^3^2', '512'],
    ['(1 + 2)*3', '9'],
    ['2*pi', `6.283${thin}185`],
    ['sqrt(16 V^2)', `4${thin}V`],
    ['(3 V)*(2 A)', `6${thin}W`],
    ['(6 V)/(2 A)', `3${thin}Ω`],
    ['1/(2 ns)', `5×10⁸${thin}1/s`],
    ['5 V + 300 mV', `5.3${thin}V`],
    ['ln(exp(2))', '2'],
    ['log10(1000)', '3'],
    ['sin(30 deg)', '0.5'],
    ['abs(-3 mV)', `3${thin}mV`],
    ['min(3 V, 200 mV)', `0.2${thin}V`],
    ['min(3 V, 20 mV)', `20${thin}mV`],
    ['max(3, 4, 5)', '5'],
    ['convert(1 eV, J)', `1.602${thin}176${thin}634×10⁻¹⁹${thin}J`],
    ['5 %', `5${thin}%`],
    ['e^2/(10 aF)', `2.566${thin}970×10⁻²¹${thin}J`],
    ['atan(1)*4', `3.141${thin}593`],
    ['3²', '9'],
  ])('%s is %s', (line, text) => {
    if (line.startsWith('e^2')) {
      // e²/C for 10 aF is 16.021 766 34 meV (constants.json of the reference data).
      const inMeV = evaluateSheet({
        cells: [{ id: 'y', source: `y = ${line}`, unit: 'meV', digits: null }],
        traces: [],
      });
      expect(inMeV.results.get('y')?.value).toBeCloseTo(16.02176634, 10);
      return;
    }
    expect(y(line).text).toBe(text);
  });

  it('carries the engine, the state and the expression', () => {
    const sheet = evaluateSheet({ cells: cellsOf(['P_esc = (I_on - I_off)/(e*f)']), traces: [] });
    expect(sheet.engine).toBe(engineVersion);
    const result = sheet.results.get('c0');
    expect(result?.dependsOn).toEqual(['I_on', 'I_off', 'f']);
    expect(result?.symbolTex).toBe('P_{\\mathrm{esc}}');
    expect(result?.expressionTex).toBe('\\frac{I_{\\mathrm{on}}-I_{\\mathrm{off}}}{e\\,f}');
  });

  it('typesets the result with italic symbol, upright subscript and upright unit', () => {
    const { mathml } = sheetOf('I_on = 29.66(12) fA')('I_on');
    expect(mathml).toBe(
      `<math><mrow><msub><mi mathvariant="italic">I</mi><mi mathvariant="normal">on</mi></msub><mo>=</mo><mn>29.66(12)</mn><mspace width="0.167em"/><mi mathvariant="normal">fA</mi></mrow></math>`,
    );
  });

  it('takes the unit and digits that the author fixed', () => {
    const cells = [{ id: 'y', source: 'y = 29.66(12) fA', unit: 'aA', digits: 1 }];
    const result = evaluateSheet({ cells, traces: [] }).results.get('y');
    expect(result).toMatchObject({ unit: 'aA', text: `2.97(1)×10⁴${thin}aA` });
    expect(evaluateSheet({ cells: [{ ...cells[0], unit: 'V' }], traces: [] }).results.get('y')?.error?.code).toBe(
      'unit-clash',
    );
  });

  it('copies as plain data, budget and all', () => {
    const result = y('2*x', 'x = 3.0(1) mV');
    expect(structuredClone(result)).toEqual(result);
    expect((JSON.parse(JSON.stringify(result)) as ValueResult).budget).toHaveLength(1);
  });
});

describe('uncertainty', () => {
  const spread = fc.double({ min: 1e-3, max: 0.3, noNaN: true });
  const number = fc.double({ min: 0.1, max: 100, noNaN: true });
  const stated = (symbol: string, value: number, u: number) => `${symbol} = normal(${value} V, ${u} V, 1)`;

  it('of x − x, x/x and x + y − x is exact through the shared input', () => {
    fc.assert(
      fc.property(number, spread, number, (value, u, other) => {
        const of = sheetOf(
          stated('x', value, u),
          stated('z', other, 2 * u),
          'd = x - x',
          'q = x/x',
          's = x + z - x',
          'w = x',
          'v = w - x',
        );
        expect(of('d')).toMatchObject({ value: 0, u: 0, text: '0' + `${thin}V` });
        expect(of('v')).toMatchObject({ value: 0, u: 0 });
        expect(of('q').u).toBeLessThan(1e-15);
        expect(of('s').text).toBe(of('z').text);
      }),
      { numRuns: 50 },
    );
  });

  it('of independent inputs adds in squares, of one input linearly', () => {
    fc.assert(
      fc.property(number, number, spread, spread, (a, b, ua, ub) => {
        const cells = [stated('x', a, ua), stated('z', b, ub), 's = x + z', 'd = 3*x', 'p = x*z', 'r = x^2'];
        const sheet = evaluateSheet({
          cells: cellsOf(cells).map((cell, i) => ({ ...cell, unit: i < 4 ? 'V' : 'V^2' })),
          traces: [],
        });
        const u = (i: number) => sheet.results.get(`c${i}`)?.u ?? NaN;
        expect(u(2)).toBeCloseTo(Math.hypot(ua, ub), 9);
        expect(u(3)).toBeCloseTo(3 * ua, 9);
        expect(u(4)).toBeCloseTo(Math.hypot(b * ua, a * ub), 7);
        expect(u(5)).toBeCloseTo(2 * a * ua, 7);
      }),
      { numRuns: 50 },
    );
  });

  it('agrees with numerical derivatives for every function', () => {
    const at = {
      sqrt: 2.3,
      exp: 0.7,
      ln: 2.3,
      log10: 2.3,
      abs: -1.5,
      sin: 0.7,
      cos: 0.7,
      tan: 0.7,
      asin: 0.4,
      acos: 0.4,
      atan: 0.9,
    };
    for (const [name, x] of Object.entries(at)) {
      const of = (value: number) => y(`${name}(x)`, `x = ${value}`).value ?? NaN;
      const slope = (of(x + 1e-6) - of(x - 1e-6)) / 2e-6;
      const u = y(`${name}(x)`, `x = normal(${x}, 0.001, 1)`).u ?? NaN;
      expect(Math.abs(u / (Math.abs(slope) * 0.001) - 1), name).toBeLessThan(1e-6);
    }
  });

  it('is asked for by u, rel and expanded', () => {
    const of = sheetOf('x = 150.0(3) pA', 'a = u(x)', 'b = rel(x)', 'c = expanded(x)');
    expect(of('a').text).toBe(`0.3${thin}pA`);
    expect(of('b').value).toBeCloseTo(0.002, 12);
    // Coverage factor of a normal distribution for 95.45 %: 2.000 (GUM table G.2).
    expect(of('c').value).toBeCloseTo(0.6, 5);
  });

  // GUM 4.3.7 (rectangular), 4.3.9 (triangular), JCGM 101 6.4.6 (arcsine).
  it.each([
    ['rectangular(0 V, 2 mV)', 2 / Math.sqrt(3), 'rectangular', null],
    ['triangular(0 V, 2 mV)', 2 / Math.sqrt(6), 'triangular', null],
    ['arcsine(0 V, 2 mV)', 2 / Math.sqrt(2), 'arcsine', null],
    ['normal(0 V, 2 mV, 2)', 1, 'normal', null],
    ['student(0 V, 2 mV, 5)', 2, 't', 5],
  ])('%s is stated by its distribution', (line, u, distribution, dof) => {
    const cells = [{ id: 'y', source: `y = ${line}`, unit: 'mV', digits: null }];
    const result = evaluateSheet({ cells, traces: [] }).results.get('y');
    expect(result?.u).toBeCloseTo(u, 12);
    expect(result?.dof).toBe(dof);
    expect(result?.budget[0]).toMatchObject({ distribution, type: 'B', input: 'y', dof });
  });

  it('says where none was stated, and where the author says exactly', () => {
    const notes = y('f/g', 'f = 200 kHz exactly', 'g = 3 kHz').budget.map(({ input, type, note }) => [
      input,
      type,
      note,
    ]);
    expect(notes).toEqual([
      ['f', 'exact', 'stated as exact'],
      ['g', 'exact', 'no uncertainty stated'],
    ]);
  });
});

describe('temperatures and levels', () => {
  it('differences of °C are K', () => {
    expect(y('T_1 - 20 °C', 'T_1 = 21.50(10) °C').text).toBe(`1.50(10)${thin}K`);
    expect(y('T_1 + 2 K', 'T_1 = 21.50(10) °C').text).toBe(`23.50(10)${thin}°C`);
    expect(y('convert(21.5 °C, K)').text).toBe(`294.65${thin}K`);
    expect(y('convert(4.2 K, °C)').text).toBe(`−268.95${thin}°C`);
  });

  it.each([
    '2*(20 °C)',
    '20 °C + 3 °C',
    '1/(20 °C)',
    '(20 °C)^2',
    'k_B*(20 °C)',
    'sqrt(20 °C)',
    '-(20 °C)',
    '5 K - 20 °C',
  ])('%s is refused', (line) => {
    expect(y(line).error?.code).toBe('unit-clash');
  });

  it('dBm needs an impedance to become a voltage', () => {
    // 0 dBm is 1 mW; into 50 Ω that is √(1 mW · 50 Ω) = 223.6 mV rms. Common practice.
    expect(y('convert(0 dBm, W)').value).toBeCloseTo(1e-3, 15);
    expect(y('convert(0 dBm, mV, 50 ohm)').value).toBeCloseTo(223.606798, 5);
    expect(y('convert(P, mV)', 'P = 0 dBm').error?.message).toContain('impedance');
    expect(y('2*P', 'P = 0 dBm').error?.code).toBe('unit-clash');
    expect(y('convert(1 mW, dBm)').text).toBe(`0${thin}dBm`);
  });
});

describe('errors', () => {
  it.each([
    ['I_on + f', 'unit-clash', 'I_on'],
    ['nope*2', 'unknown-name', '`nope`'],
    ['I_on/(f - f)', 'division-by-zero', 'f - f'],
    ['sqrt(0 - 1)', 'domain', 'negative'],
    ['ln(0)', 'domain', 'positive'],
    ['asin(2)', 'domain', 'asin'],
    ['exp(I_on)', 'unit-clash', 'exp'],
    ['2^I_on', 'unit-clash', 'exponent'],
    ['1e300*1e300', 'too-large', 'range'],
    ['mean(I_on)', 'syntax', 'column'],
    ['t1.I', 'unknown-name', 'no trace'],
    ['0^(0-1)', 'division-by-zero', '0'],
    ['(0-2)^0.5', 'domain', 'negative'],
    ['asin(x_1)', 'domain', 'first order'],
    ['rel(I_on - I_on)', 'division-by-zero', 'relative'],
    ['5 K/h', 'syntax', 'hour'],
    ['rectangular(0 V, 2 mA)', 'unit-clash', 'rectangular'],
    ['rectangular(0 V)', 'syntax', 'half-width'],
    ['normal(1 V, 1 mV, 0)', 'domain', 'positive'],
    ['convert(I_on, V)', 'unit-clash', 'V'],
  ])('%s is %s', (line, code, part) => {
    const { state, error, text, value } = y(line, 'f = 200 kHz exactly', 'I_on = 29.66(12) fA', 'x_1 = 1.00(1)');
    expect(state).toBe('error');
    expect(error?.code).toBe(code);
    expect(error?.message).toContain(part);
    expect([text, value]).toEqual([null, null]);
  });

  it('name what failed to those that depend on it', () => {
    const of = sheetOf('a = nope', 'b = 2*a', 'c = b + 1');
    expect(of('b').error?.message).toContain('`a`');
    expect(of('c').error?.message).toContain('`b`');
    expect(of('c').error?.code).toBe('unknown-name');
  });

  it('name the members of a circle, and nothing else', () => {
    const of = sheetOf('a = b + 1', 'b = c', 'c = a', 'd = a', 'x = 2', 's = s + 1');
    for (const symbol of ['a', 'b', 'c']) {
      expect(of(symbol).error?.code).toBe('circle');
      expect(of(symbol).error?.message).toContain('`a`, `b` and `c`');
    }
    expect(of('d').error?.message).toContain('could not be calculated');
    expect(of('x').state).toBe('ok');
    expect(of('s').error?.message).toContain('from itself');
  });

  it('mark both lines that define one symbol', () => {
    const sheet = evaluateSheet({ cells: cellsOf(['a = 1', 'a = 2', 'b = a']), traces: [] });
    expect(['c0', 'c1', 'c2'].map((id) => sheet.results.get(id)?.error?.code)).toEqual(Array(3).fill('defined-twice'));
  });

  it('ask which is meant where a unit is also a symbol', () => {
    expect(y('5 V/A', 'A = 3 m^2').error?.message).toContain('A is a unit or the symbol A');
    expect(y('5 V/A', 'B = 3 m^2').text).toBe(`5${thin}V/A`);
    expect(y('(5 V)/A', 'A = 2 m^2').state).toBe('ok');
  });

  it('do not depend on the order of the lines', () => {
    expect(sheetOf('y = 2*x', 'x = 3 V')('y').text).toBe(`6${thin}V`);
  });
});

describe('taking over from the sheet before', () => {
  it('gives what a fresh calculation gives, whatever was edited', () => {
    const pool = [
      'a = 2.0(1) V',
      'a = 3.0(1) V',
      'b = 2*a',
      'b = a*c',
      'c = 5 A',
      'c = b',
      'c = nope',
      'd = b/c',
      'd = a - a',
      'q',
      'd = 5 V/A',
      'A = 3',
    ];
    const edit = fc.array(fc.constantFrom(...pool), { minLength: 4, maxLength: 6 });
    fc.assert(
      fc.property(fc.array(edit, { minLength: 2, maxLength: 5 }), (states) => {
        let sheet;
        for (const lines of states) sheet = evaluateSheet({ cells: cellsOf(lines), traces: [] }, sheet);
        const fresh = evaluateSheet({ cells: cellsOf(states.at(-1) ?? []), traces: [] });
        expect(structuredClone(sheet)).toEqual(structuredClone(fresh));
      }),
      { numRuns: 200 },
    );
  });

  it('keeps the results of what did not change', () => {
    const cells = cellsOf(['a = 1 V', 'b = 2*a', 'c = 3 A', 'd = 2*c']);
    const first = evaluateSheet({ cells, traces: [] });
    const second = evaluateSheet(
      { cells: cells.map((cell) => (cell.id === 'c0' ? { ...cell, source: 'a = 4 V' } : { ...cell })), traces: [] },
      first,
    );
    expect(second.results.get('c3')).toBe(first.results.get('c3'));
    expect(second.results.get('c1')?.text).toBe(`8${thin}V`);
  });
});
