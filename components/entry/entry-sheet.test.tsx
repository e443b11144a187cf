import { cleanup, fireEvent, render, screen, waitFor, within } from '@testing-library/react';
import userEvent from '@testing-library/user-event';
import { afterEach, beforeAll, beforeEach, describe, expect, it, vi } from 'vitest';
import { sampleDocument, sampleTrace } from '@/lib/document/sample';
import { documentText } from '@/lib/document/text';
import type { DocumentJson } from '@/lib/document/json';
import { evaluateSheet } from '@/lib/expression/evaluate';
import type { DraftDto, EntryDto, SaveDraft, VersionContentDto } from '@/lib/schemas/entry';
import { CommandMenu } from '@/components/commands/command-menu';
import { CommandProvider } from '@/components/commands/command-context';
import { ReadingText } from '@/components/reading/reading-text';
import { EntrySheet } from './entry-sheet';

vi.mock('next/navigation', () => ({ useRouter: () => ({ push: vi.fn() }) }));

const tomas = { id: 'p1', name: 'Tomas Reinholt', initials: 'TR' };
const priya = { id: 'p2', name: 'Priya Menon', initials: 'PM' };
const may = { write: true, ask: false, answer: false, sign: true, countersign: false, strikeOut: true, invite: true };

const entry = (parts: Partial<EntryDto> = {}): EntryDto => ({
  id: 'e1',
  notebook: { code: 'NB-03', title: 'Pumps' },
  leaf: 37,
  title: 'Escape over the exit barrier, day two',
  workDate: '2026-11-19',
  state: 'draft',
  author: tomas,
  contributors: [],
  cooldown: { id: 'c1', name: 'Tern 24' },
  devices: [{ id: 'd1', name: 'GA1-B3' }],
  head: null,
  struckReason: null,
  questions: [],
  signatures: [],
  traces: [],
  may,
  countersignObstacle: null,
  seen: { traces: 0, of: 0 },
  late: null,
  ...parts,
});
const stamp = (at: string, by: string) => ({ at, received: at, by, offsetMs: 0 });
const simple = (...lines: string[]): DocumentJson => ({
  type: 'doc',
  content: lines.map((words, index) => ({
    type: 'paragraph',
    attrs: { id: `block_${index}` },
    content: [{ type: 'text', text: words }],
  })),
});
const draft = (doc: DocumentJson): DraftDto => ({
  entryId: 'e1',
  revision: 4,
  title: 'Escape over the exit barrier, day two',
  doc,
  stamps: {
    block_0: {
      first: stamp('2026-11-19T09:14:00+01:00', 'p1'),
      last: stamp('2026-11-19T09:31:00+01:00', 'p2'),
      digest: '',
    },
  },
  savedAt: '2026-11-19T09:31:02.000Z',
  savedBy: tomas,
});

type Reply = { status: number; body: unknown };
let puts: SaveDraft[];
let requests: string[];
let answer: (method: string, url: string, body: unknown) => Reply;

const saved = (revision: number): Reply => ({
  status: 200,
  body: { revision, savedAt: '2026-11-19T13:03:22.000Z', stamps: {} },
});

beforeAll(async () => {
  // Fetched on first use; read here, so that no test waits for it.
  await import('./writing-sheet');
  Range.prototype.getClientRects = () => [] as unknown as DOMRectList;
  Range.prototype.getBoundingClientRect = () => new DOMRect();
  document.elementFromPoint = () => null;
  globalThis.ResizeObserver ??= class {
    observe() {}
    unobserve() {}
    disconnect() {}
  };
});
beforeEach(() => {
  puts = [];
  requests = [];
  answer = (method, url) => {
    if (url === '/api/session') return { status: 200, body: { serverTime: new Date().toISOString() } };
    if (method === 'PUT') return saved(4 + puts.length);
    return { status: 404, body: { error: { code: 'not_found', message: 'There is no such thing.' } } };
  };
  vi.stubGlobal('fetch', (url: string, init: RequestInit = {}) => {
    const method = init.method ?? 'GET';
    const body: unknown = typeof init.body === 'string' ? JSON.parse(init.body) : null;
    requests.push(`${method} ${url}`);
    if (method === 'PUT') puts.push(body as SaveDraft);
    const { status, body: reply } = answer(method, url, body);
    return Promise.resolve(new Response(JSON.stringify(reply), { status, headers: { 'x-kelvinleaf-build': 'b1' } }));
  });
});
afterEach(() => {
  cleanup();
  vi.unstubAllGlobals();
});

const write = (doc: DocumentJson, parts: Partial<EntryDto> = {}) =>
  render(
    <CommandProvider>
      <EntrySheet
        entry={entry(parts)}
        draft={draft(doc)}
        equations={{}}
        version={null}
        text={null}
        person={tomas}
        build="b1"
      />
      <CommandMenu />
    </CommandProvider>,
  );
const titleField = () => screen.findByRole('textbox', { name: 'Title' });

describe('writing', () => {
  it('shows leaf, facts, state and who wrote which block when', async () => {
    write(simple('Bath at 4.21 K'), { contributors: [priya] });
    const block = await screen.findByText('Bath at 4.21 K');
    await waitFor(() => expect(block.getAttribute('data-when')).toBe('09:14 TR\n09:31 PM'));
    expect(screen.getByText('37')).toBeTruthy();
    expect(screen.getByText('being written')).toBeTruthy();
    expect(screen.getByRole('heading', { level: 1 }).textContent).toContain('Escape over');
    expect(screen.getByText(/^saved /)).toBeTruthy();
  });

  it('sends what was written with the revision it was based on, and says when it is saved', async () => {
    write(simple('one'));
    fireEvent.change(await titleField(), { target: { value: 'Day three' } });
    expect(screen.getByText(/not yet on the server/)).toBeTruthy();
    await waitFor(() => expect(puts).toHaveLength(1), { timeout: 3000 });
    expect(puts[0]).toMatchObject({ basedOn: 4, title: 'Day three', doc: simple('one') });
    await screen.findByText(/^saved \d\d:\d\d:\d\d$/);
  });

  it('warns once that this browser keeps nothing (28: there is no IndexedDB here)', async () => {
    write(simple('one'));
    fireEvent.change(await titleField(), { target: { value: 'Day three' } });
    const warning = await screen.findByText(/This browser keeps nothing on its own/);
    expect(warning.getAttribute('role')).toBe('alert');
    expect(screen.getAllByText(/This browser keeps nothing/)).toHaveLength(1);
  });

  it('shows both texts on a conflict, and keeps both unless told otherwise (26)', async () => {
    const theirs = {
      ...draft(simple('one, theirs')),
      revision: 9,
      savedBy: priya,
      title: 'Escape over the exit barrier, day two',
    };
    let conflicts = 1;
    const ordinary = answer;
    answer = (method, url, body) => {
      if (method === 'PUT' && conflicts > 0) {
        conflicts -= 1;
        return {
          status: 409,
          body: { error: { code: 'conflict', message: 'Changed elsewhere.', details: { current: theirs } } },
        };
      }
      if (method === 'PUT') return saved(10);
      return ordinary(method, url, body);
    };
    write(simple('one, mine'));
    fireEvent.change(await titleField(), { target: { value: 'Day three' } });
    const user = userEvent.setup();
    await user.click(await screen.findByRole('button', { name: 'Compare' }, { timeout: 3000 }));
    const compare = screen.getByRole('region', { name: /Another window changed/ });
    expect(compare.textContent).toContain('one, theirs');
    expect(compare.textContent).toContain('one, mine');
    expect(within(compare).getByRole<HTMLInputElement>('radio', { name: 'keep both' }).checked).toBe(true);
    await user.click(within(compare).getByRole('button', { name: /Keep this/ }));
    await waitFor(() => expect(puts).toHaveLength(2));
    expect(puts[1]!.basedOn).toBe(9);
    expect(documentText(puts[1]!.doc as DocumentJson)).toBe('one, theirs\none, mine');
    await screen.findByText(/^saved /);
  });

  it('signs in again in place when the session has ended, and goes on (27)', async () => {
    let signedIn = false;
    const ordinary = answer;
    answer = (method, url, body) => {
      if (method === 'PUT' && !signedIn)
        return { status: 401, body: { error: { code: 'signed_out', message: 'Signed out.' } } };
      if (url === '/api/session/renew') {
        signedIn = true;
        return { status: 200, body: { secondFactor: false } };
      }
      if (url === '/api/session')
        return { status: 200, body: { person: tomas, serverTime: new Date().toISOString(), demo: false } };
      return ordinary(method, url, body);
    };
    write(simple('one'));
    fireEvent.change(await titleField(), { target: { value: 'Day three' } });
    const user = userEvent.setup();
    await user.click(await screen.findByRole('button', { name: 'Sign in again' }, { timeout: 3000 }));
    const dialog = await screen.findByRole('dialog', undefined, { timeout: 10_000 });
    await user.type(within(dialog).getByLabelText('E-mail'), 'tomas@fjordheim.example');
    await user.type(within(dialog).getByLabelText('Password'), 'cold-finger-demo');
    await user.click(within(dialog).getByRole('button', { name: 'Sign in' }));
    await screen.findByText(/^saved \d\d/, undefined, { timeout: 3000 });
    expect(puts.at(-1)!.title).toBe('Day three');
  });

  it('shows the server’s sentence on a refusal and keeps the text', async () => {
    const ordinary = answer;
    answer = (method, url, body) =>
      method === 'PUT'
        ? {
            status: 413,
            body: { error: { code: 'too_large', message: 'The entry is longer than 4 MB. Continue in a new one.' } },
          }
        : ordinary(method, url, body);
    write(simple('one'));
    const field = await titleField();
    fireEvent.change(field, { target: { value: 'Day three' } });
    await screen.findAllByText(/longer than 4 MB/, undefined, { timeout: 3000 });
    expect((field as HTMLTextAreaElement).value).toBe('Day three');
    expect(screen.getByRole('button', { name: 'Try now' })).toBeTruthy();
  });

  it('cuts a version on Ctrl+S, and names values that the server finds otherwise', async () => {
    const ordinary = answer;
    answer = (method, url, body) =>
      method === 'POST' && url.endsWith('/versions')
        ? {
            status: 422,
            body: {
              error: {
                code: 'invalid',
                message: 'A result differs.',
                details: { differing: [{ id: 'x', symbol: 'P_esc', shown: '0.91', computed: '0.92' }] },
              },
            },
          }
        : ordinary(method, url, body);
    write(simple('one'));
    await titleField();
    fireEvent.keyDown(window, { key: 's', ctrlKey: true });
    await screen.findByText(/P_esc: shown 0.91, the server finds 0.92/);
    expect(requests).toContain('POST /api/entries/e1/versions');
  });

  it('offers its actions in the command menu', async () => {
    write(simple('one'));
    await screen.findByRole('toolbar');
    fireEvent.keyDown(window, { key: 'k', ctrlKey: true });
    const user = userEvent.setup();
    await user.type(await screen.findByRole('combobox', { name: 'Find or do' }), 'log li');
    const option = await screen.findByRole('option', { name: /Log line/ });
    expect(option.getAttribute('aria-selected')).toBe('true');
    await user.keyboard('{Enter}');
    await waitFor(() => expect(document.querySelector('.log-line')).not.toBeNull());
    expect(screen.queryByRole('combobox', { name: 'Find or do' })).toBeNull();
  });
});

describe('reading', () => {
  const doc = sampleDocument();
  const version: VersionContentDto = {
    id: 'v1',
    entryId: 'e1',
    seq: 6,
    digest: '9f3a61c2'.repeat(8),
    previous: null,
    createdAt: '2026-11-19T12:00:00.000Z',
    createdBy: tomas,
    reason: null,
    title: 'Escape over the exit barrier, day two',
    doc,
    stamps: {},
    values: [
      ...evaluateSheet({
        cells: [{ id: 'value_f_01', source: 'f = 200 kHz exactly', unit: null, digits: null }],
        traces: [],
      }).results.values(),
    ],
    traces: [],
  };
  const read = (parts: Partial<EntryDto> = {}) => {
    const shown = entry({
      state: 'signed',
      may: { ...may, write: false, sign: false, ask: true, countersign: true },
      head: { id: 'v1', seq: 6, digest: version.digest, createdAt: version.createdAt, createdBy: tomas },
      ...parts,
    });
    return render(
      <EntrySheet
        entry={shown}
        draft={null}
        equations={{}}
        version={version}
        text={<ReadingText entry={shown} version={version} person={priya} />}
        person={priya}
        build="b1"
      />,
    );
  };

  it('shows the version’s values, and where one comes from, by keyboard', async () => {
    read();
    const value = await screen.findByRole('button', { name: /^value f = 200/ });
    value.focus();
    fireEvent.keyDown(value, { key: 'Enter' });
    const column = screen.getByRole('complementary', { name: 'Provenance' });
    expect(within(column).getByText('f = 200 kHz exactly')).toBeTruthy();
    expect(within(column).getByText(/Exact\./)).toBeTruthy();
    expect(document.querySelector('[contenteditable="true"]')).toBeNull();
  });

  it('asks about a block, with its words, and shows the question at its place', async () => {
    const ordinary = answer;
    answer = (method, url, body) =>
      url === '/api/entries/e1/questions'
        ? {
            status: 200,
            body: {
              id: 'q1',
              entryId: 'e1',
              ...(body as object),
              askedBy: priya,
              askedAt: '2026-11-19T11:05:00.000Z',
              state: 'open',
              answers: [],
              mayAnswer: false,
            },
          }
        : ordinary(method, url, body);
    read();
    const user = userEvent.setup();
    await user.click(await screen.findByText('One working point'));
    await user.click(screen.getByRole('button', { name: 'Ask' }));
    await user.type(screen.getByLabelText('Your question'), 'was the offset taken before?');
    await user.click(screen.getByRole('button', { name: 'Ask' }));
    const question = await screen.findByRole('article', { name: 'Question by Priya Menon' });
    expect(question.textContent).toContain('was the offset taken before?');
    const heading = screen.getByText('One working point', { selector: 'h2' });
    expect(heading.compareDocumentPosition(question) & Node.DOCUMENT_POSITION_FOLLOWING).toBeTruthy();
    expect(document.querySelector('.entry-text')!.contains(question)).toBe(true);
  });

  it('shows a question about text that is gone below the text', async () => {
    const question = {
      id: 'q9',
      entryId: 'e1',
      versionDigest: version.digest,
      blockId: 'gone_block',
      quote: 'an earlier sentence',
      text: 'why?',
      askedBy: priya,
      askedAt: '2026-11-19T11:05:00.000Z',
      state: 'open' as const,
      answers: [],
      mayAnswer: true,
    };
    read({ questions: [question] });
    const below = await screen.findByRole('region', { name: /text that is gone/ });
    expect(below.textContent).toContain('an earlier sentence');
    expect(within(below).getByRole('button', { name: 'Answer' })).toBeTruthy();
  });

  it('says why countersigning has to wait', async () => {
    read({ seen: { traces: 1, of: 2 }, countersignObstacle: 'One question is open.' });
    await screen.findByText('1 of 2 traces seen.');
    expect(screen.getByText('One question is open.')).toBeTruthy();
    expect(screen.queryByRole('link', { name: 'Countersign' })).toBeNull();
  });

  it('tells what a trace is when it is chosen', async () => {
    const node = sampleTrace();
    const file = {
      id: String(node.attrs!.traceId),
      entryId: 'e1',
      fileName: 'on-off-0931.csv',
      mediaType: 'text/csv',
      bytes: 1_234_567,
      sha256: 'b71e04dd'.repeat(8),
      state: 'parsed' as const,
      problem: null,
      rows: 48_000,
      columns: [],
      comments: [],
      uploadedBy: tomas,
      receivedAt: '2026-11-19T08:36:00.000Z',
    };
    read({ traces: [file] });
    fireEvent.click(await screen.findByRole('region', { name: 'trace t1' }));
    const column = screen.getByRole('complementary', { name: 'Provenance' });
    expect(column.textContent).toContain('on-off-0931.csv');
    expect(column.textContent).toContain(file.sha256);
    expect(column.textContent).toContain('CAL-0181');
    expect(column.textContent).toContain('positive into the drain');
  });
});
