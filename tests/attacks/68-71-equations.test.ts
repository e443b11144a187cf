import { describe, expect, it } from 'vitest';
import { typeset } from '@/lib/document/katex';

const problemOf = (tex: string) => {
  const outcome = typeset(tex, true);
  return 'problem' in outcome ? outcome.problem : null;
};

describe('68–71 equations from strangers', () => {
  it.each([
    '\\href{javascript:alert(1)}{x}',
    '\\href{JAVASCRIPT:alert(1)}{x}',
    '\\href{HTTPS://evil.example}{x}',
    '\\url{javascript:alert(1)}',
    '\\includegraphics{https://evil.example/a.png}',
    '\\htmlData{a=b}{x}',
    '\\htmlClass{c}{x}',
    '\\htmlId{i}{x}',
    '\\htmlStyle{position:fixed}{x}',
    '\\def\\x{\\href}\\x{javascript:alert(1)}{x}',
    '\\let\\y\\url \\y{javascript:alert(1)}',
  ])('%s never becomes a link, a file or an attribute', (tex) => {
    const outcome = typeset(tex, false);
    if ('markup' in outcome) {
      expect(outcome.markup).not.toMatch(/<a |<img|href=|src=|data-|position:fixed/i);
    } else expect(outcome.problem).toBeTruthy();
  });

  it('has a problem with the commands themselves', () => {
    expect(problemOf('\\href{https://a.example}{x}')).toMatch(/\\href is not allowed/);
    expect(problemOf('\\hrefx')).not.toMatch(/not allowed/);
  });

  it.each(['\\def\\a{\\a\\a}\\a', '\\def\\a{\\b}\\def\\b{\\a}\\a', '\\edef\\a{\\a}\\a', '\\newcommand\\a{\\a}\\a'])(
    'ends the macro loop %s',
    (tex) => {
      const start = performance.now();
      expect(problemOf(tex)).toMatch(/.+/);
      expect(performance.now() - start).toBeLessThan(2000);
    },
  );

  it('caps the size of rules and spaces', () => {
    const outcome = typeset('\\rule{100000em}{100000em}', true);
    const drawn = 'markup' in outcome ? outcome.markup.replace(/<annotation.*?<\/annotation>/s, '') : '';
    expect(drawn).toContain('20em');
    expect(drawn).not.toMatch(/\d{3,}em/);
  });

  it('gives errors as plain text, not as markup', () => {
    const problem = problemOf('\\frac{<img src=x onerror=alert(1)>');
    expect(problem).toBeTruthy();
    // The text may quote the input; whoever shows it has to show it as text, as the view's test proves.
    expect(typeset('<b>x</b>', false)).toHaveProperty('markup');
    expect((typeset('\\text{<img src=x onerror=alert(1)>}', false) as { markup: string }).markup).not.toContain('<img');
  });

  it('does not keep macros from one equation to the next', () => {
    typeset('\\gdef\\mine{x}', false);
    expect(problemOf('\\mine')).toMatch(/Undefined control sequence/);
  });

  it('refuses 1e5 braces and long sources with a sentence', () => {
    expect(problemOf('{'.repeat(8000))).toBeTruthy();
    expect(problemOf('x'.repeat(9000))).toMatch(/longer than 8000/);
  });

  it('writes MathML beside the picture of it', () => {
    const outcome = typeset('\\tau_{\\mathrm{esc}}', true);
    expect('markup' in outcome && outcome.markup).toContain('<math');
  });
});
