import { Fragment, type ReactNode } from 'react';
import { gutterText } from '@/components/entry/gutter-text';
import { peopleOf } from '@/components/entry/people';
import type { NodeJson } from '@/lib/document/json';
import type { EntryDto, PersonDto, VersionContentDto } from '@/lib/schemas/entry';
import { markedText } from './marks';
import { ownBlock, readingValue, type Bound } from './own-nodes';
import { PlacedQuestions } from './placed-questions';

type Props = { entry: EntryDto; version: VersionContentDto; person: PersonDto };

/**
 * The text of a version as the editor would show it, without the editor: rendered on the server, so that it is read
 * before any script runs, and equations are typeset there. Blocks of its own kinds are in own-nodes.tsx.
 */
export function ReadingText({ entry, version, person }: Props) {
  const { doc, stamps } = version;
  const { initials } = peopleOf(entry, person);
  const state = { stamps, written: {}, initials, own: '', workDate: entry.workDate };
  const bound: Bound = { values: new Map(version.values.map((value) => [value.id, value])) };
  return (
    <div className="entry-text" role="document" aria-label="Text of the entry">
      {(doc.content ?? []).map((block, index) => {
        const id = typeof block.attrs?.id === 'string' ? block.attrs.id : null;
        return (
          <Fragment key={id ?? index}>
            {blockOf(block, bound, {
              'data-id': id ?? undefined,
              'data-when': id === null ? '' : gutterText(id, state),
            })}
            {id === null ? null : <PlacedQuestions blockId={id} />}
          </Fragment>
        );
      })}
    </div>
  );
}

type BlockProps = { 'data-id'?: string | undefined; 'data-when'?: string };
const alignments = new Set(['left', 'center', 'right']);

function blocksOf(node: NodeJson, bound: Bound): ReactNode {
  return (node.content ?? []).map((child, index) => <Fragment key={index}>{blockOf(child, bound, {})}</Fragment>);
}

function inlineOf(node: NodeJson, bound: Bound): ReactNode {
  // An empty line keeps its height.
  if (!node.content?.length) return <br />;
  return node.content.map((child, index) => <Fragment key={index}>{inlineNode(child, bound)}</Fragment>);
}

function inlineNode(node: NodeJson, bound: Bound): ReactNode {
  if (node.type === 'text') return markedText(node);
  if (node.type === 'hardBreak') return <br />;
  return readingValue(node, bound);
}

function cellProps(node: NodeJson) {
  const { colspan, rowspan, align } = node.attrs ?? {};
  return {
    colSpan: typeof colspan === 'number' && colspan > 1 ? colspan : undefined,
    rowSpan: typeof rowspan === 'number' && rowspan > 1 ? rowspan : undefined,
    style: typeof align === 'string' && alignments.has(align) ? { textAlign: align as 'left' } : undefined,
  };
}

function blockOf(node: NodeJson, bound: Bound, props: BlockProps): ReactNode {
  const attrs = node.attrs ?? {};
  switch (node.type) {
    case 'paragraph':
      return <p {...props}>{inlineOf(node, bound)}</p>;
    case 'heading': {
      const Heading = attrs.level === 1 ? 'h1' : attrs.level === 2 ? 'h2' : 'h3';
      return <Heading {...props}>{inlineOf(node, bound)}</Heading>;
    }
    case 'blockquote':
      return <blockquote {...props}>{blocksOf(node, bound)}</blockquote>;
    case 'bulletList':
      return <ul {...props}>{blocksOf(node, bound)}</ul>;
    case 'orderedList':
      return (
        <ol {...props} start={Number(attrs.start ?? 1)} type={(attrs.type as '1' | null | undefined) ?? undefined}>
          {blocksOf(node, bound)}
        </ol>
      );
    case 'listItem':
      return <li>{blocksOf(node, bound)}</li>;
    case 'taskList':
      return (
        <ul {...props} data-type="taskList">
          {blocksOf(node, bound)}
        </ul>
      );
    case 'taskItem':
      return <Task node={node}>{blocksOf(node, bound)}</Task>;
    case 'table':
      return (
        <table {...props}>
          <tbody>{blocksOf(node, bound)}</tbody>
        </table>
      );
    case 'tableRow':
      return <tr>{blocksOf(node, bound)}</tr>;
    case 'tableHeader':
      return <th {...cellProps(node)}>{blocksOf(node, bound)}</th>;
    case 'tableCell':
      return <td {...cellProps(node)}>{blocksOf(node, bound)}</td>;
    case 'codeBlock':
      return (
        <pre {...props}>
          <code>{(node.content ?? []).map((child) => child.text ?? '').join('')}</code>
        </pre>
      );
    case 'horizontalRule':
      return <hr {...props} />;
    default:
      // Its view carries the id; what hangs in the gutter stands on the block around it.
      return (
        <div data-when={props['data-when']}>
          {ownBlock(node, bound, node.type === 'logLine' ? inlineOf(node, bound) : null)}
        </div>
      );
  }
}

function Task({ node, children }: { node: NodeJson; children: ReactNode }) {
  const checked = node.attrs?.checked === true;
  const words = (node.content ?? []).flatMap((line) => line.content ?? []).map((piece) => piece.text ?? '');
  return (
    <li data-checked={checked}>
      <label>
        <input
          type="checkbox"
          disabled
          defaultChecked={checked}
          aria-label={words.join('') || 'empty line of the list'}
        />
      </label>
      <div>{children}</div>
    </li>
  );
}
