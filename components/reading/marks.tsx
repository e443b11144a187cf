import type { ReactNode } from 'react';
import type { NodeJson } from '@/lib/document/json';
import { allowedLink } from '@/lib/document/nodes/link';

const wrap: Record<string, (inside: ReactNode) => ReactNode> = {
  bold: (inside) => <strong>{inside}</strong>,
  italic: (inside) => <em>{inside}</em>,
  strike: (inside) => <s>{inside}</s>,
  code: (inside) => <code>{inside}</code>,
  subscript: (inside) => <sub>{inside}</sub>,
  superscript: (inside) => <sup>{inside}</sup>,
};

/** A piece of text with its marks; a link only where it leads to an allowed address. */
export function markedText(node: NodeJson): ReactNode {
  return (node.marks ?? []).reduceRight<ReactNode>((inside, mark) => {
    if (mark.type === 'link') {
      const href = allowedLink(mark.attrs?.href);
      return href === null ? (
        inside
      ) : (
        <a href={href} rel="noopener noreferrer nofollow">
          {inside}
        </a>
      );
    }
    const around = Object.hasOwn(wrap, mark.type) ? wrap[mark.type] : undefined;
    return around ? around(inside) : inside;
  }, node.text ?? '');
}
