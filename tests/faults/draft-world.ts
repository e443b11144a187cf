import { vi } from 'vitest';
import type { DraftPorts, KeptDraft, SaveReply, Sending } from '@/lib/draft/contract';
import { DraftSaver } from '@/lib/draft/saver';
import type { DocumentJson } from '@/lib/document/json';
import { clockTime } from '@/lib/document/clock-time';
import type { DraftDto } from '@/lib/schemas/entry';

export const person = { id: 'p1', name: 'Tomas Reinholt', initials: 'TR' };

export const docOf = (...lines: string[]): DocumentJson => ({
  type: 'doc',
  content: lines.map((text, index) => ({
    type: 'paragraph',
    attrs: { id: `block_${index}` },
    content: [{ type: 'text', text }],
  })),
});
export const linesOf = (doc: DocumentJson) => (doc.content ?? []).map((block) => block.content?.[0]?.text ?? '');

/** A draft store that keeps the promises of the real route: one revision per save, repeats answered by saveId. */
export class FakeServer {
  revision = 1;
  draft: DocumentJson = docOf('first');
  title = 'Escape, day two';
  history: DocumentJson[] = [];
  private readonly answers = new Map<string, SaveReply>();
  signedIn = true;
  reachable = true;
  /** Commits, but the reply does not arrive. */
  losesReplies = 0;
  build = 'b1';
  underway = 0;
  mostUnderway = 0;
  delays: number[] = [];

  dto(): DraftDto {
    return {
      entryId: 'e1',
      revision: this.revision,
      title: this.title,
      doc: this.draft,
      stamps: {},
      savedAt: '2026-11-19T13:03:22.000Z',
      savedBy: person,
    };
  }

  async save(body: Sending): Promise<SaveReply> {
    this.underway += 1;
    this.mostUnderway = Math.max(this.mostUnderway, this.underway);
    // What goes over the wire is a copy.
    const sent = JSON.parse(JSON.stringify(body)) as Sending;
    const delay = this.delays.shift() ?? 10;
    await new Promise((resolve) => setTimeout(resolve, delay));
    this.underway -= 1;
    if (!this.reachable) return { kind: 'unreachable' };
    const reply = this.commit(sent);
    if (this.losesReplies > 0) {
      this.losesReplies -= 1;
      return { kind: 'unreachable' };
    }
    return reply;
  }

  private commit(body: Sending): SaveReply {
    const refused = { kind: 'refused' as const, message: 'no', current: null, retryAfterMs: null };
    if (!this.signedIn) return { ...refused, code: 'signed_out' };
    const before = this.answers.get(body.saveId);
    if (before) return before;
    if (body.basedOn !== this.revision) return { ...refused, code: 'conflict', current: this.dto() };
    this.revision += 1;
    this.draft = body.doc as DocumentJson;
    this.title = body.title;
    this.history.push(this.draft);
    const reply: SaveReply = {
      kind: 'saved',
      revision: this.revision,
      savedAt: '2026-11-19T13:03:22.000Z',
      stamps: {},
      build: this.build,
    };
    this.answers.set(body.saveId, reply);
    return reply;
  }
}

export type Kept = Parameters<DraftPorts['keep']>[0];

export function windowOn(server: FakeServer, store: { kept: Kept | null; works?: boolean } = { kept: null }) {
  let id = 0;
  const ports: DraftPorts = {
    send: (body) => server.save(body),
    keep: (draft) => {
      if (store.works === false) return Promise.reject(new Error('no IndexedDB'));
      store.kept = JSON.parse(JSON.stringify(draft)) as Kept;
      return Promise.resolve();
    },
    forget: () => {
      store.kept = null;
      return Promise.resolve();
    },
    now: () => new Date(),
    clockTime,
    newId: () => `00000000-0000-4000-8000-${String(Math.random()).slice(2, 8)}${String((id += 1)).padStart(6, '0')}`,
    schedule: (run, ms) => {
      const timer = setTimeout(run, ms);
      return () => clearTimeout(timer);
    },
    clockOffsetMs: () => 0,
  };
  const { revision, title, draft: doc } = server;
  const saver = new DraftSaver(ports, { revision, title, doc, stamps: {}, savedAt: null, build: 'b1' });
  return { saver, store, type: (...lines: string[]) => saver.change(title, docOf(...lines), ['block_0']) };
}

export const pass = (ms: number) => vi.advanceTimersByTimeAsync(ms);
export type { KeptDraft };
