import 'server-only';
import { AppError } from '@/lib/errors/app-error';
import type { EntryState } from '@/lib/schemas/entry';
import type { NotebookRole } from '@/lib/schemas/person';

type Rule = {
  /** What the call names: a resource by its id, the signed-in person only, the installation, or nothing. */
  target: 'public' | 'person' | 'installation' | 'notebook' | 'entry' | 'trace' | 'device' | 'cooldown' | 'question';
  roles?: readonly NotebookRole[];
  /** Who the person must be to the entry. */
  relation?: 'author' | 'writer' | 'no part';
  states?: readonly EntryState[];
  /** Personal tokens never sign, administer, or change who may do what. */
  token?: boolean;
};

const all: readonly NotebookRole[] = ['lead', 'author', 'witness', 'reader'];
const authors: readonly NotebookRole[] = ['lead', 'author'];
const colleagues: readonly NotebookRole[] = ['lead', 'author', 'witness'];

/** Every right of the application. What is not here is refused. */
export const actions = {
  public: { target: 'public', token: true },
  self: { target: 'person' },
  'self.read': { target: 'person', token: true },
  'installation.administer': { target: 'installation' },
  'notebook.found': { target: 'person' },
  'notebook.read': { target: 'notebook', roles: all, token: true },
  'notebook.change': { target: 'notebook', roles: ['lead'] },
  'notebook.audit': { target: 'notebook', roles: ['lead', 'reader'] },
  'entry.create': { target: 'notebook', roles: authors, token: true },
  'layout.save': { target: 'notebook', roles: ['lead'] },
  'device.create': { target: 'notebook', roles: authors },
  'device.read': { target: 'device', roles: all, token: true },
  'device.change': { target: 'device', roles: authors },
  'cooldown.create': { target: 'notebook', roles: authors },
  'cooldown.read': { target: 'cooldown', roles: all, token: true },
  'cooldown.change': { target: 'cooldown', roles: authors },
  'entry.read': { target: 'entry', roles: all, token: true },
  'entry.write': { target: 'entry', roles: authors, relation: 'writer', states: ['draft'], token: true },
  'entry.invite': { target: 'entry', roles: authors, relation: 'author', states: ['draft'] },
  'entry.strike': { target: 'entry', roles: authors, relation: 'author', states: ['draft'] },
  'entry.sign': { target: 'entry', roles: authors, relation: 'author', states: ['draft'] },
  'entry.requestWitness': { target: 'entry', roles: authors, relation: 'author', states: ['signed'] },
  'entry.countersign': { target: 'entry', roles: colleagues, relation: 'no part', states: ['signed'] },
  'entry.ask': { target: 'entry', roles: colleagues, states: ['signed'] },
  'question.answer': { target: 'question', roles: colleagues },
  'trace.read': { target: 'trace', roles: all, token: true },
} as const satisfies Record<string, Rule>;

export type Action = keyof typeof actions;
export type TargetOf<A extends Action> = (typeof actions)[A]['target'];

export type Standing = {
  role: NotebookRole | null;
  entry: { state: EntryState; isAuthor: boolean; mayContribute: boolean; tookPart: boolean } | null;
};

const frozenSentence: Record<Exclude<EntryState, 'draft'>, string> = {
  signed:
    'This entry is signed and cannot be edited. What you typed is kept in this browser; a signed entry changes only by an amendment.',
  witnessed:
    'This entry is signed and countersigned and cannot be edited. What you typed is kept in this browser; a signed entry changes only by an amendment.',
  'struck out': 'This entry is struck out: it stays readable and is not changed any more.',
};

/**
 * The one decision. Returns nothing when allowed.
 * @throws AppError not_found to an outsider; not_allowed to a member without the right; frozen where the entry's state forbids it.
 */
export function decide(action: Action, standing: Standing): void {
  const rule: Rule = actions[action];
  if (!rule.roles) return;
  if (!standing.role) throw new AppError('not_found', 'There is nothing here, or it is not for you to see.');
  if (!rule.roles.includes(standing.role)) {
    throw new AppError(
      'not_allowed',
      `This needs the role ${listWords(rule.roles)} in the notebook; yours is ${standing.role}.`,
    );
  }
  const { entry } = standing;
  if (!entry) return;
  if (rule.relation === 'author' && !entry.isAuthor) {
    throw new AppError('not_allowed', 'Only the author of this entry can do this.');
  }
  if (rule.relation === 'writer' && !entry.isAuthor && !entry.mayContribute) {
    throw new AppError(
      'not_allowed',
      'Only the author, and colleagues whom the author has invited, write in this entry.',
    );
  }
  if (rule.relation === 'no part' && (entry.isAuthor || entry.tookPart)) {
    throw new AppError(
      'not_allowed',
      entry.isAuthor
        ? 'This is your own entry: a colleague who took no part in the work countersigns it.'
        : 'You have contributed to this entry: a colleague who took no part in the work countersigns it.',
    );
  }
  if (rule.states && !rule.states.includes(entry.state)) {
    const sentence =
      entry.state === 'draft'
        ? 'This entry is not signed yet; until then this cannot be done.'
        : frozenSentence[entry.state];
    throw new AppError('frozen', sentence);
  }
}

/** Whether `decide` would allow it: for showing or leaving out a control. */
export function allows(action: Action, standing: Standing): boolean {
  try {
    decide(action, standing);
    return true;
  } catch (error) {
    if (error instanceof AppError) return false;
    throw error;
  }
}

function listWords(words: readonly string[]): string {
  return words.length === 1 ? words[0] : `${words.slice(0, -1).join(', ')} or ${words[words.length - 1]}`;
}
