import { describe, expect, it } from 'vitest';
import { evaluateSheet } from '@/lib/expression/evaluate';
import { parseUnit } from '@/lib/units/parse';
import { cellsOf, traceOf } from '@/lib/expression/example-trace';

/**
 * Attack case 101: escape from the expression engine, endless evaluation, huge results. Each line must come back as a
 * sentence. Nothing here is timed: work is bounded by length, depth and size, and a line that broke the bounds would run
 * into the suite's own limit.
 */
function errorOf(source: string) {
  const result = evaluateSheet({ cells: [{ id: 'a', source, unit: null, digits: null }], traces: [] }).results.get('a');
  expect(result?.state, source.slice(0, 80)).toBe('error');
  expect([result?.value, result?.text]).toEqual([null, null]);
  return result?.error ?? { code: '', message: '' };
}

describe('attack 101: the expression engine', () => {
  it.each([
    'x = import({a: 1})',
    'x = import("fs")',
    'x = createUnit("foo")',
    'x = createUnit(foo)',
    'x = evaluate("1")',
    'x = parse("1")',
    'x = simplify(a)',
    'x = derivative(a, b)',
    'x = config({})',
    'x = typed(a)',
    'x = constructor',
    'x = constructor(1)',
    'x = a.constructor',
    'x = a.constructor.constructor("return process")()',
    'x = mean.constructor(1)',
    'x = sqrt.constructor',
    'x = sqrt["constructor"]("return 1")',
    'x = __proto__',
    'x = t1.__proto__',
    'x = t1.constructor',
    'x = toString',
    'x = hasOwnProperty(a)',
    'x = valueOf()',
    'x = f(x) = x',
    'f(x) = x^2',
    'x = (y = 3)',
    'x = [1, 2, 3]',
    'x = zeros(1e9)',
    'x = ones(1e5, 1e5)',
    'x = matrix(1e9)',
    'x = range(0, 1e9)',
    'x = 0:1e9',
    'x = {a: process}',
    'x = process',
    'x = globalThis',
    'x = window.location',
    'x = this',
    'x = end',
    'x = a?.b',
    'x = `${1}`',
    'x = 1; while(1){}',
    'x = for(1)',
    'x = a => a',
    'x = function(a)',
    'x = 1 == 1',
    'x = true',
    'x = null',
    'x = NaN',
    'x = Infinity',
    'x = i',
    'x = version',
    'x = unit("5 cm")',
    'x = 5 cm to inch',
    'x = factorial(170)',
    'x = 9!',
    'x = 0x41',
    'x = \u0000',
    'x = \u202e1',
    'x = \ud800',
    'x = ${1}',
    'x = $0',
    'x = $constructor',
  ])('%s', (source) => {
    expect(errorOf(source).message).toMatch(/[.)]$/);
  });

  it.each(['__proto__', 'constructor', 'toString', 'hasOwnProperty', 'prototype'])(
    '%s is no unit, no column, no span',
    (name) => {
      expect(() => parseUnit(name)).toThrow(/is not a unit|cannot be read as a unit/);
      expect(errorOf(`x = 5 ${name}`).code).toMatch(/unknown-unit|syntax/);
      const trace = traceOf('t1', [{ symbol: 'I', unit: 'A', samples: [1, 2, 3] }]);
      const sheet = evaluateSheet({ cells: cellsOf([`x = t1.${name}`, `y = mean(t1.I, ${name})`]), traces: [trace] });
      expect([...sheet.results.values()].map(({ state }) => state)).toEqual(['error', 'error']);
    },
  );

  it('symbols that are names of object properties are plain symbols', () => {
    const sheet = evaluateSheet({
      cells: cellsOf(['constructor = 2', 'toString = 3*constructor', 'x = toString']),
      traces: [],
    });
    expect(sheet.results.get('c2')?.value).toBe(6);
    expect(({} as Record<string, unknown>).polluted).toBeUndefined();
  });

  it('refuses a line of a million characters, and depth of a hundred thousand', () => {
    expect(errorOf(`x = ${'1+'.repeat(500_000)}1`).code).toBe('too-large');
    expect(errorOf(`x = ${'('.repeat(100_000)}1${')'.repeat(100_000)}`).code).toBe('too-large');
    expect(errorOf(`x = ${'-'.repeat(100_000)}1`).code).toBe('too-large');
    expect(errorOf(`${'x'.repeat(1_000_000)} = 1`).code).toBe('too-large');
    expect(errorOf('='.repeat(1_000_000)).code).toBe('too-large');
  });

  it('reads or refuses the deepest lines that the length allows', () => {
    expect(errorOf(`x = ${'('.repeat(900)}1${')'.repeat(900)}`).code).toBe('too-large');
    expect(errorOf(`x = ${'sqrt('.repeat(300)}1${')'.repeat(300)}`).code).toBe('too-large');
    const read = (source: string) => evaluateSheet({ cells: cellsOf([source]), traces: [] }).results.get('c0');
    for (const source of [
      `x = ${'-'.repeat(1900)}1`,
      `x = ${'1^'.repeat(390)}1`,
      `x = ${'1+'.repeat(390)}1`,
      `x = ${'1^'.repeat(950)}1`,
    ]) {
      expect(['ok', 'error']).toContain(read(source)?.state);
    }
    expect(read(`x = ${'1+'.repeat(390)}1`)?.value).toBe(391);
  });

  it('bounds powers, exponents and numbers', () => {
    expect(errorOf('x = 9^9^9^9').code).toBe('too-large');
    expect(errorOf('x = 1e999999999').code).toBe('too-large');
    expect(errorOf('x = (2 V)^1000').code).toBe('too-large');
    expect(errorOf('x = 5 V^999999').code).toBe('syntax');
    expect(errorOf('x = exp(exp(exp(10)))').code).toBe('too-large');
  });

  it('keeps patterns from running away', () => {
    for (const source of [
      `x = ${'1 '.repeat(950)}`,
      `x = ${'1\u2009'.repeat(950)}`,
      `x = 5 ${'V '.repeat(900)}`,
      `x = 5 ${'V/'.repeat(900)}`,
      `x = 5${'('.repeat(1900)}`,
      `x = ${'(1 ± '.repeat(300)}`,
      `x = ${'1±'.repeat(900)}1`,
      `x = convert(1, ${'('.repeat(1800)}`,
      `x = convert(1, ${'V^(1/'.repeat(300)}`,
      `x = ${'√'.repeat(1900)}`,
      `x = 5 ${'√'.repeat(1900)}Hz`,
    ]) {
      errorOf(source);
    }
  });

  it('bounds the work with columns, and says so the same when lines are taken over', () => {
    // Eight million rows each: three columns are 2.4e7 rows, four are more than an entry keeps.
    const rows = traceOf('t2', [{ symbol: 'x', unit: '1', samples: new Float64Array(8_000_000).fill(1) }]);
    const kept = Array.from({ length: 4 }, (_, i) => `t2.y_${i} = t2.x + ${i}`);
    const sheet = evaluateSheet({ cells: cellsOf(kept), traces: [rows] });
    expect(sheet.results.get('c2')?.state).toBe('ok');
    expect(sheet.results.get('c3')?.error?.code).toBe('too-large');
    const again = evaluateSheet({ cells: cellsOf(kept), traces: [rows] }, sheet);
    expect(again.results.get('c2')).toBe(sheet.results.get('c2'));
    expect(again.results.get('c3')?.error?.code).toBe('too-large');
  });

  it('bounds the number of lines, and keeps long chains from overflowing the stack', () => {
    const chain = ['x_0 = 1', ...Array.from({ length: 4000 }, (_, i) => `x_${i + 1} = x_${i} + 1`)];
    const sheet = evaluateSheet({ cells: cellsOf(chain), traces: [] });
    expect(sheet.results.get('c4000')?.value).toBe(4001);
    const ring = Array.from({ length: 4000 }, (_, i) => `x_${i} = x_${(i + 1) % 4000}`);
    expect(evaluateSheet({ cells: cellsOf(ring), traces: [] }).results.get('c17')?.error?.code).toBe('circle');
    const many = Array.from({ length: 5002 }, (_, i) => `y_${i} = 1`);
    expect(evaluateSheet({ cells: cellsOf(many), traces: [] }).results.get('c5001')?.error?.code).toBe('too-large');
  });
});
