import { cautionText } from './caution-text';
import type { NodeJson } from './json';
import { valueLine } from './value-line';

const lineTypes = new Set([
  'paragraph',
  'heading',
  'codeBlock',
  'logLine',
  'equationBlock',
  'caution',
  'picture',
  'trace',
]);

function leafText(node: NodeJson): string {
  const attrs = node.attrs ?? {};
  switch (node.type) {
    case 'text':
      return node.text ?? '';
    case 'hardBreak':
      return '\n';
    case 'value':
      return valueLine(attrs.source, attrs.shown);
    case 'equation':
    case 'equationBlock':
      return String(attrs.tex ?? '');
    case 'trace':
      return String(attrs.handle ?? '');
    case 'picture':
      return [attrs.alt, attrs.caption].filter((part) => typeof part === 'string' && part !== '').join('. ');
    case 'caution':
      return cautionText.title;
    case 'logLine':
      return typeof attrs.at === 'string' ? `${attrs.at.slice(11, 16)} ` : '';
    default:
      return '';
  }
}

/** Plain text in reading order, one line per paragraph, cell, log line or equation. For search and for differences. */
export function documentText(root: NodeJson): string {
  let text = '';
  const work: NodeJson[] = [root];
  for (let node = work.pop(); node !== undefined; node = work.pop()) {
    if (lineTypes.has(node.type) && text !== '' && !text.endsWith('\n')) text += '\n';
    text += leafText(node);
    const children = node.content ?? [];
    for (let i = children.length - 1; i >= 0; i -= 1) {
      const child = children[i];
      if (child) work.push(child);
    }
  }
  return text;
}
