import { readFileSync } from 'node:fs';
import path from 'node:path';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { symbolSchema } from '@/lib/document/attributes';
import { ColumnCollector, parseTextTrace, TextTraceParser } from './text-parser';

const encode = (text: string) => new TextEncoder().encode(text);
const parse = (text: string | Uint8Array) => parseTextTrace(typeof text === 'string' ? encode(text) : text);
const refusal = (text: string | Uint8Array): string => {
  try {
    parse(text);
  } catch (error) {
    return (error as Error).message;
  }
  throw new Error('the file was read');
};
const list = (column: Float64Array | undefined) => Array.from(column ?? []);

describe('awkward instrument files, against their expected parse', () => {
  const folder = path.resolve('tests/reference/messy');
  type Expected = {
    file: string;
    header?: string[];
    units?: string[];
    n_rows?: number;
    comment_lines?: number;
    columns?: Record<string, (number | null)[]>;
    missing_per_column?: number[];
    x?: number[];
    y?: number[];
    map_rows_y_cols_x?: number[][];
  };
  const { files } = JSON.parse(readFileSync(path.join(folder, 'expected.json'), 'utf8')) as { files: Expected[] };

  it('has all four of them', () => expect(files).toHaveLength(4));

  it.each(files)('$file', (expected) => {
    const { trace, columns } = parse(new Uint8Array(readFileSync(path.join(folder, expected.file))));
    if (expected.header) expect(trace.columns.map(({ header }) => header)).toEqual(expected.header);
    if (expected.units) expect(trace.columns.map(({ unit }) => unit)).toEqual(expected.units);
    if (expected.n_rows) expect(trace.rows).toBe(expected.n_rows);
    if (expected.comment_lines) expect(trace.comments).toHaveLength(expected.comment_lines);
    if (expected.missing_per_column)
      expect(trace.columns.map(({ missing }) => missing)).toEqual(expected.missing_per_column);
    const wanted = Object.entries(expected.columns ?? {});
    wanted.forEach(([name, values], i) => {
      expect(list(columns[i]).map((value) => (Number.isNaN(value) ? null : value))).toEqual(values);
      if (!/^c\d$/.test(name)) expect(trace.columns[i]?.name).toBe(name);
    });
    if (expected.map_rows_y_cols_x && expected.x && expected.y) {
      const width = expected.x.length;
      expected.map_rows_y_cols_x.forEach((row, j) => {
        expect(list(columns[2]).slice(j * width, (j + 1) * width)).toEqual(row);
        expect(list(columns[1]).slice(j * width, (j + 1) * width)).toEqual(row.map(() => expected.y?.[j]));
      });
      expect(list(columns[0]).slice(0, width)).toEqual(expected.x);
    }
    for (const { symbol } of trace.columns) expect(() => symbolSchema.parse(symbol)).not.toThrow();
  });

  it('says what it decided', () => {
    const { trace } = parse(new Uint8Array(readFileSync(path.join(folder, 'sweep_2031-02-10_a.csv'))));
    expect(trace.dialect).toMatchObject({ delimiter: ';', decimal: ',', byteOrderMark: true, encoding: 'utf-8' });
    expect(trace.dialect.decided).toContain('semicolons, decimal comma');
    expect(trace.columns.map(({ symbol }) => symbol)).toEqual(['Time', 'V_exit', 'I', 'I_2']);
    expect(trace.comments[0]).toBe('# device = Otter-3');
    expect(trace.columns[0]?.direction).toBe('increasing');
    expect(trace.columns[2]?.direction).toBe('neither');
  });
});

describe('numbers', () => {
  it('are rounded as ECMAScript rounds them, whatever their form', () => {
    const number = fc.oneof(
      fc.double({ noNaN: true, noDefaultInfinity: true }),
      fc.double({ noNaN: true, min: -1e6, max: 1e6 }),
      fc.integer().map((n) => n / 1000),
    );
    const form = fc.constantFrom<(x: number) => string>(
      String,
      (x) => x.toExponential(6),
      (x) => x.toPrecision(17),
      (x) => `  ${x.toExponential(15).replace('e', 'D')}`,
      (x) => (Math.abs(x) < 1e20 ? x.toFixed(9) : String(x)),
    );
    fc.assert(
      fc.property(fc.array(fc.tuple(number, form), { minLength: 1, maxLength: 30 }), (cells) => {
        const written = cells.map(([x, write]) => write(x));
        const { columns } = parse(`x;y\n${written.map((cell) => `${cell};1`).join('\n')}\n`);
        const wanted = written.map((cell) => Number(cell.trim().replace('D', 'e')));
        // What no double can hold is missing.
        expect(list(columns[0])).toEqual(wanted.map((value) => (Number.isFinite(value) ? value : NaN)));
      }),
    );
  });

  it('keeps the halfway cases of binary64', () => {
    // 2^53 + 1 lies halfway between two doubles, IEEE 754-2019 4.3.1 ties to even; the second digit string is just above.
    const { columns } = parse(
      'a\n9007199254740993\n9007199254740993.00000000000000000001\n4.9406564584124654e-324\n2.2250738585072011e-308\n',
    );
    expect(list(columns[0])).toEqual([9007199254740992, 9007199254740994, Number.MIN_VALUE, 2.2250738585072011e-308]);
  });

  it('reads missing and infinite samples as missing and says so', () => {
    const { trace, columns } = parse('t,I\n0,1\n1,NaN\n2,nan\n3,--\n4,\n5,inf\n6,1e999\n');
    expect(list(columns[1]).map(Number.isNaN)).toEqual([false, true, true, true, true, true, true]);
    expect(trace.columns[1]?.missing).toBe(6);
    expect(trace.notes.join()).toContain('2 infinite or overflowing');
  });
});

describe('layouts', () => {
  it('gives the same whatever the chunks', () => {
    const text = '# made up\r\nt / s\tI / pA\r\n0,5\t-1,25\r\n\r\n# pause\r\n1,5\t2,5e-3\r\n2,5\t';
    const whole = parse(text);
    for (const size of [1, 2, 3, 7, 16]) {
      const collector = new ColumnCollector();
      const parser = new TextTraceParser(collector.sink);
      const bytes = encode(text);
      for (let i = 0; i < bytes.length; i += size) parser.push(bytes.subarray(i, i + size));
      expect(parser.finish()).toEqual(whole.trace);
      expect(collector.result()).toEqual(whole.columns);
    }
    expect(whole.trace.columns.map(({ name, unit }) => [name, unit])).toEqual([
      ['t', 's'],
      ['I', 'pA'],
    ]);
    expect(whole.trace.comments).toEqual(['# made up', '# pause']);
  });

  it.each([
    ['t (s), I (pA)\n0, 1.5\n1, 2.5\n', ',', '.', ['t', 'I']],
    ['t;I\n0;1,5\n1;2,5\n', ';', ',', ['t', 'I']],
    ['t I\n0 1,5\n1 2,5\n', ' ', ',', ['t', 'I']],
    ['I (pA)\n1,5\n2,5\n', '\t', ',', ['I']],
    ['1 2\t3\n4 5\t6\n', ' ', '.', ['c1', 'c2', 'c3']],
    ['V_x\tV_x\tin\n1\t\t3\n', '\t', '.', ['V_x', 'V_x_2', 'in_']],
    ['f_MHz,I_pA,V_S\n1,2,3\n', ',', '.', ['f', 'I', 'V_S']],
  ])('reads %j', (text, delimiter, decimal, symbols) => {
    const { trace } = parse(text);
    expect(trace.dialect).toMatchObject({ delimiter, decimal });
    expect(trace.columns.map(({ symbol }) => symbol)).toEqual(symbols);
  });

  it('leaves a unit that is not stated open', () => {
    expect(parse('Time,I (pA),V_S\n0,1,2\n').trace.columns.map(({ unit }) => unit)).toEqual([null, 'pA', null]);
  });

  it('notes that a comma without a header was taken for a delimiter', () => {
    expect(parse('1,5\n2,5\n').trace.notes.join()).toContain('not as a decimal comma');
  });

  it('keeps a preamble, a trailing delimiter, quoted cells and words', () => {
    const { trace, columns } = parse(
      'Lock-in run 7\nStarted;2031-02-10\n\nt (s);state;I (pA);\n"0,5";idle;1;\n1,5;on;2;\n',
    );
    expect(trace.comments).toEqual(['Lock-in run 7', 'Started;2031-02-10']);
    expect(trace.columns.map(({ name, text }) => [name, text])).toEqual([
      ['t', false],
      ['state', true],
      ['I', false],
    ]);
    expect(list(columns[0])).toEqual([0.5, 1.5]);
    expect(list(columns[2])).toEqual([1, 2]);
  });

  it('reads UTF-16 with its mark and Windows-1252 with a note', () => {
    const text = 't (µs)\tI (pA)\n1\t2\n';
    const wide = new Uint8Array(2 + text.length * 2);
    wide.set([0xff, 0xfe]);
    for (let i = 0; i < text.length; i += 1) new DataView(wide.buffer).setUint16(2 + 2 * i, text.charCodeAt(i), true);
    expect(parse(wide).trace.columns[0]?.unit).toBe('µs');
    const latin = Uint8Array.from(text, (char) => char.charCodeAt(0));
    const { trace } = parse(latin);
    expect(trace.columns[0]?.unit).toBe('µs');
    expect(trace.notes.join()).toContain('Line 1 is not valid UTF-8');
  });

  it('reads carriage returns alone as line ends', () => {
    expect(list(parse('a,b\r1,2\r3,4\r').columns[1])).toEqual([2, 4]);
  });
});

describe('refusals', () => {
  it.each([
    ['', 'empty'],
    ['hello\nworld\n', 'no line of numbers'],
    ['t,I\n0,1\n1,2\n2\n3,4\n', 'Line 4 has 1 column where the others have 2'],
    ['t,I,V\n0,1\n1,2,3\n2,3,4\n', 'Line 2 has 2 columns'],
    ['t;I\n0;1,5\n1;2.5\n', 'Line 3 holds "2.5" in column 2 (I)'],
    ['t,I\n0,1\n1,"2\n', 'Line 3 opens a quotation mark that is never closed'],
    ['t,I\n0,1\n1,abc\n2,3\n', 'holds "abc"'],
    ['t,I\n0,1\n\x001,2\n', 'NUL byte'],
    ['a,b,c\n1,2\n3,4\n', 'Line 1 names 3 columns, but line 2 holds 2'],
  ])('%j', (text, sentence) => expect(refusal(text)).toContain(sentence));

  it('names a picture and an archive', () => {
    expect(refusal(Uint8Array.of(0x89, 0x50, 0x4e, 0x47, 0x0d, 0x0a, 0x1a, 0x0a, 0, 0, 0, 13))).toContain(
      'a PNG picture',
    );
    expect(refusal(Uint8Array.of(0x50, 0x4b, 3, 4, 0, 0, 0, 0))).toContain('ZIP');
  });

  it('names the line of a fault far beyond the first block', () => {
    const good = '0.001,2.5\n'.repeat(50_000);
    expect(refusal(`t,I\n${good}1,x\n`)).toContain('Line 50002 holds "x"');
    expect(refusal(`t,I\n${good}1\n${good}`)).toContain('Line 50002 has 1 column');
    expect(refusal(`t,I\n${good}1,\x00\n`)).toContain('NUL');
  });
});
