'use client';

import { useMemo, useState } from 'react';
import { textDifference, type TextPart } from '@/lib/document/difference';
import type { DocumentJson, NodeJson } from '@/lib/document/json';
import { divergences, mergeDocuments, type Choice } from '@/lib/document/merge';
import { documentText } from '@/lib/document/text';

type Text = { title: string; doc: DocumentJson };
type Props = {
  mine: Text;
  theirs: Text & { who: string; when: string };
  onChoose: (title: string, doc: DocumentJson, changed: string[]) => void;
  onLater: () => void;
};

/** Words with what was added and taken away marked in more than colour. */
export function MarkedText({ parts }: { parts: TextPart[] }) {
  return (
    <span className="marked-text">
      {parts.map((part, index) =>
        part.change === 'added' ? (
          <ins key={index}>{part.text}</ins>
        ) : part.change === 'removed' ? (
          <del key={index}>{part.text}</del>
        ) : (
          <span key={index}>{part.text}</span>
        ),
      )}
    </span>
  );
}

const names: Record<Choice, string> = { mine: 'mine', theirs: 'the other', both: 'both' };

/** Two texts of one entry side by side. Both survive: what is not decided is kept twice. */
export function Compare({ mine, theirs, onChoose, onLater }: Props) {
  const differing = useMemo(() => divergences(theirs.doc, mine.doc), [theirs.doc, mine.doc]);
  const [choices, setChoices] = useState<ReadonlyMap<string, Choice>>(new Map());
  const [title, setTitle] = useState<'mine' | 'theirs'>('mine');
  const keep = () => {
    const merged = mergeDocuments(theirs.doc, mine.doc, choices);
    onChoose(title === 'mine' ? mine.title : theirs.title, merged.doc, merged.changed);
  };
  const all = (choice: Choice) => setChoices(new Map(differing.map(({ id }) => [id, choice])));
  return (
    <section className="compare" aria-labelledby="compare-title">
      <h2 id="compare-title">Another window changed this entry</h2>
      <p>
        {theirs.who}, {theirs.when}: the other text is on the server. Yours is kept in this browser. Nothing is
        overwritten; choose for each of the {differing.length} differing {differing.length === 1 ? 'block' : 'blocks'},
        or keep both.
      </p>
      <p className="flex flex-wrap gap-2">
        <button type="button" className="small-press" onClick={() => all('both')}>
          Both everywhere
        </button>
        <button type="button" className="small-press" onClick={() => all('mine')}>
          Mine everywhere
        </button>
        <button type="button" className="small-press" onClick={() => all('theirs')}>
          The other everywhere
        </button>
      </p>
      {mine.title !== theirs.title ? (
        <fieldset className="compare-block">
          <legend>Title</legend>
          {(['mine', 'theirs'] as const).map((side) => (
            <label key={side}>
              <input type="radio" name="title" checked={title === side} onChange={() => setTitle(side)} /> {names[side]}
              : {side === 'mine' ? mine.title : theirs.title}
            </label>
          ))}
        </fieldset>
      ) : null}
      <ol>
        {differing.map(({ id, mine: my, theirs: their }, index) => (
          <li key={id}>
            <fieldset className="compare-block">
              <legend>
                Block {index + 1} of {differing.length}
              </legend>
              <div className="compare-sides">
                <Side name="mine" node={my} other={their} />
                <Side name="the other" node={their} other={my} />
              </div>
              <div className="compare-choice">
                {(['both', 'mine', 'theirs'] as const).map((choice) => (
                  <label key={choice}>
                    <input
                      type="radio"
                      name={`choice-${id}`}
                      checked={(choices.get(id) ?? 'both') === choice}
                      onChange={() => setChoices(new Map(choices).set(id, choice))}
                    />{' '}
                    keep {names[choice]}
                  </label>
                ))}
              </div>
            </fieldset>
          </li>
        ))}
      </ol>
      <p className="flex gap-2">
        <button type="button" className="press press-main" onClick={keep}>
          Keep this and go on writing
        </button>
        <button type="button" className="press" onClick={onLater}>
          Later
        </button>
      </p>
    </section>
  );
}

function Side({ name, node, other }: { name: string; node: NodeJson | null; other: NodeJson | null }) {
  const text = node ? documentText(node) : '';
  const parts = other
    ? textDifference(documentText(other), text).filter((part) => part.change !== 'removed')
    : [{ text, change: 'same' as const }];
  return (
    <div>
      <h3>{name}</h3>
      {node ? (
        <p>{text.trim() === '' ? <em>{node.type}, no text</em> : <MarkedText parts={parts} />}</p>
      ) : (
        <p className="text-quiet">not there</p>
      )}
    </div>
  );
}
