import { describe, expect, it } from 'vitest';
import { attachmentHeader, cleanFileName } from './file-name';

describe('names of attached files', () => {
  it.each([
    ['../../etc/passwd', 'passwd'],
    ['C:\\Users\\x\\scan.csv', 'scan.csv'],
    ['/abs/a.csv', 'a.csv'],
    ['a\r\nSet-Cookie: x=1.csv', 'aSet-Cookie: x=1.csv'],
    ['exe\u202evsc.csv', 'exevsc.csv'],
    ['..', 'file without a name'],
    ['', 'file without a name'],
    ['Übergänge µ.csv', 'Übergänge µ.csv'],
  ])('%j is recorded as %j', (given, kept) => expect(cleanFileName(given)).toBe(kept));

  it('keeps the ending of a name of 300 characters', () => {
    const name = cleanFileName(`${'x'.repeat(300)}.csv`);
    expect(name).toHaveLength(255);
    expect(name.endsWith('.csv')).toBe(true);
  });

  it('leaves letters in NFD as they are', () => {
    const name = 'Å.csv'.normalize('NFD');
    expect(cleanFileName(name)).toBe(name);
  });

  it('writes the header in both forms, RFC 6266 section 5 and RFC 8187 3.2.3', () => {
    // The two encodings of these examples follow RFC 8187: `£ rates` and `€ rates`.
    expect(attachmentHeader('£ rates')).toContain("filename*=UTF-8''%C2%A3%20rates");
    expect(attachmentHeader('€ rates')).toContain("filename*=UTF-8''%E2%82%AC%20rates");
    expect(attachmentHeader('a"; filename=evil.html')).toMatch(
      /^attachment; filename="[^"\\\r\n]*"; filename\*=UTF-8''[A-Za-z0-9!#$&+.^_`|~%-]*$/,
    );
    expect(attachmentHeader('con.csv')).toContain('filename="_con.csv"');
    expect(attachmentHeader('a\r\nX: y.csv')).not.toMatch(/[\r\n]/);
  });
});
