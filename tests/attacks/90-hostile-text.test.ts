import { describe, expect, it } from 'vitest';
import { TraceFormatError } from '@/lib/trace-format/parsed-trace';
import { parseTextTrace } from '@/lib/trace-format/text-parser';

const encode = (text: string) => new TextEncoder().encode(text);
const sentence = (bytes: Uint8Array): string => {
  try {
    parseTextTrace(bytes);
  } catch (error) {
    return (error as Error).message;
  }
  throw new Error('it was read');
};

describe('90: hostile text files end in a sentence, and in time', () => {
  it('a million columns', () => {
    const line = Array.from({ length: 1_000_000 }, (_, i) => i % 10).join(',');
    expect(sentence(encode(`${line}\n${line}\n`))).toMatch(/longer than 1 MiB|columns; a trace takes up to 256/);
    const many = Array.from({ length: 300 }, (_, i) => i).join(',');
    expect(sentence(encode(`${many}\n${many}\n`))).toContain('300 columns; a trace takes up to 256');
  });

  it('one lone quotation mark, in the header and far below it', () => {
    expect(sentence(encode('"t,I\n0,1\n1,2\n'))).toMatch(/quotation mark that is never closed|names/);
    expect(sentence(encode(`t,I\n${'0,1\n'.repeat(100_000)}"0,1\n${'0,1\n'.repeat(1000)}`))).toContain(
      'Line 100002 opens a quotation mark',
    );
  });

  it('NUL bytes and mixed encodings', () => {
    expect(sentence(encode('t,I\n0,1\n\0\0\0\n'))).toContain('NUL byte');
    const mixed = Buffer.concat([
      encode('# µ in UTF-8\n'),
      Buffer.from('# \xb5 in Latin-1\n', 'latin1'),
      encode('t,I\n0,1\n'),
    ]);
    expect(parseTextTrace(mixed).trace.notes.join()).toContain('Line 2 is not valid UTF-8');
    // UTF-16 without its mark is full of NUL bytes.
    expect(sentence(Buffer.from('t,I\n0,1\n', 'utf16le'))).toContain('UTF-16 without its mark');
  });

  it.each([
    ['blanks', ' '.repeat(900_000)],
    ['brackets', '('.repeat(900_000)],
    ['quotation marks', '"'.repeat(900_000)],
    ['signs', '+-'.repeat(450_000)],
    ['digits', '1'.repeat(900_000)],
    ['exponents', '1e'.repeat(450_000)],
    ['slashes', ' / '.repeat(300_000)],
    ['delimiters of every kind', ',;\t '.repeat(225_000)],
  ])('lines of %s do not hold the reader up', (_name, pattern) => {
    // A pattern that took time in the square of the line would not come back within this test's time limit.
    const bytes = encode(`${pattern}\nt,I\n0,1\n1,2\n`);
    try {
      const { trace } = parseTextTrace(bytes);
      expect(trace.rows).toBe(2);
    } catch (error) {
      expect(error).toBeInstanceOf(TraceFormatError);
    }
  });
});
