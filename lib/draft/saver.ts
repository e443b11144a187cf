import type { DocumentJson } from '@/lib/document/json';
import type { BlockStamps, DraftDto } from '@/lib/schemas/entry';
import {
  draftTimes,
  type DraftPorts,
  type DraftSnapshot,
  type DraftStatus,
  type KeptDraft,
  type SaveReply,
  type Sending,
} from './contract';
import { sameDocument } from '@/lib/document/same';

type Start = {
  revision: number;
  title: string;
  doc: DocumentJson;
  stamps: BlockStamps;
  savedAt: string | null;
  build: string;
};

/**
 * Brings an entry's text to the server. The promises:
 * every change is in the browser's store within 100 ms, except where that store fails, which `keeps` says;
 * at most one save is on its way, and a newer one goes only after the fate of the older is known;
 * a save whose reply was lost is repeated word for word under its saveId;
 * the browser's copy is cleared only after the server has acknowledged the very text that it holds;
 * a conflict, an ended session or a refusal stops sending and loses nothing.
 */
export class DraftSaver {
  private title: string;
  private doc: DocumentJson;
  private revision: number;
  private stamps: BlockStamps;
  private written: Record<string, string> = {};
  private sending: Sending | null = null;
  private onItsWay = false;
  private unsent = false;
  private status: DraftStatus;
  private keeps = true;
  private outdated = false;
  private failures = 0;
  private restingSince: number | null = null;
  private cancelKeep: (() => void) | null = null;
  private cancelSend: (() => void) | null = null;
  private readonly listeners = new Set<() => void>();
  private readonly waiting = new Set<(saved: boolean) => void>();
  private snapshot: DraftSnapshot;
  private closed = false;

  constructor(
    private readonly ports: DraftPorts,
    private readonly start: Start,
  ) {
    this.title = start.title;
    this.doc = start.doc;
    this.revision = start.revision;
    this.stamps = start.stamps;
    this.status = { kind: 'saved', at: start.savedAt };
    this.snapshot = this.look();
  }

  subscribe = (listener: () => void): (() => void) => {
    this.listeners.add(listener);
    return () => this.listeners.delete(listener);
  };

  read = (): DraftSnapshot => this.snapshot;

  text(): { title: string; doc: DocumentJson } {
    return { title: this.title, doc: this.doc };
  }

  /** Takes the text as it now stands, with the ids of the blocks that changed. */
  change(title: string, doc: DocumentJson, changed: readonly string[]): void {
    this.title = title;
    this.doc = doc;
    const at = this.ports.clockTime(this.ports.now());
    for (const id of changed) this.written[id] = at;
    this.unsent = true;
    this.keepSoon();
    if (this.status.kind === 'saved' || this.status.kind === 'refused') this.status = { kind: 'kept', why: 'resting' };
    this.sendAfterRest();
    this.tell();
  }

  /**
   * Takes up what an earlier window of the same person could not send. Resolves true once this window's own copy is
   * in the browser's store, so that the other may be cleared.
   */
  restore(kept: Pick<KeptDraft, 'revision' | 'title' | 'doc' | 'written' | 'sending'>): Promise<boolean> {
    this.title = kept.title;
    this.doc = kept.doc;
    this.revision = kept.revision;
    this.written = { ...kept.written };
    this.sending = kept.sending;
    this.unsent = true;
    this.status = { kind: 'kept', why: 'resting' };
    const done = this.keepNow();
    this.sendAfterRest();
    this.tell();
    return done;
  }

  /** The server's draft was changed elsewhere and nothing here is unsent: take it over. False if something is. */
  adopt(draft: DraftDto): boolean {
    if (this.unsent || this.sending) return false;
    if (draft.revision < this.revision) return false;
    this.revision = draft.revision;
    this.title = draft.title;
    this.doc = draft.doc;
    this.stamps = draft.stamps;
    this.status = { kind: 'saved', at: draft.savedAt };
    this.tell();
    return true;
  }

  /** After a conflict: the text that the person chose goes on top of the server's revision. */
  resolve(title: string, doc: DocumentJson, changed: readonly string[]): void {
    if (this.status.kind !== 'conflict') return;
    const { current } = this.status;
    this.revision = current.revision;
    this.stamps = current.stamps;
    this.sending = null;
    this.status = { kind: 'kept', why: 'resting' };
    this.change(title, doc, changed);
    this.sendNow();
  }

  /** The person has signed in again, the network is back, or they ask to try now. */
  resume(): void {
    if (this.status.kind === 'signed-out' || this.status.kind === 'refused') {
      this.status = this.unsent ? { kind: 'kept', why: 'resting' } : { kind: 'saved', at: this.start.savedAt };
    }
    this.failures = 0;
    if (this.unsent) this.sendNow();
    this.tell();
  }

  /** Another request was told that the session has ended. */
  sessionEnded(): void {
    this.status = { kind: 'signed-out' };
    this.tell();
  }

  /** Sends what is unsent without waiting for rest; resolves true once the server holds this text. */
  flush(): Promise<boolean> {
    if (!this.unsent && !this.sending) return Promise.resolve(true);
    const stopped = ['conflict', 'signed-out', 'frozen'];
    if (stopped.includes(this.status.kind)) return Promise.resolve(false);
    const done = new Promise<boolean>((resolve) => this.waiting.add(resolve));
    this.sendNow();
    return done;
  }

  /** The window is going: keep at once, and hand the network one last save that may outlive the page. */
  leave(): void {
    void this.keepNow();
    if (this.unsent && !this.onItsWay && this.maySend()) this.sendNow(true);
  }

  close(): void {
    this.closed = true;
    this.cancelSend?.();
    if (this.cancelKeep) void this.keepNow();
    this.listeners.clear();
  }

  private maySend(): boolean {
    return this.status.kind === 'saved' || this.status.kind === 'kept';
  }

  private keepSoon(): void {
    this.cancelKeep ??= this.ports.schedule(() => void this.keepNow(), draftTimes.keep);
  }

  private keepNow(): Promise<boolean> {
    this.cancelKeep?.();
    this.cancelKeep = null;
    if (!this.unsent) return Promise.resolve(true);
    const { title, doc, revision, written, sending } = this;
    const kept = { keptAt: this.ports.now().toISOString(), title, doc, revision, written: { ...written }, sending };
    return this.ports.keep(kept).then(
      () => this.setKeeps(true),
      () => this.setKeeps(false),
    );
  }

  private setKeeps(keeps: boolean): boolean {
    if (this.keeps !== keeps) {
      this.keeps = keeps;
      this.tell();
    }
    return keeps;
  }

  private sendAfterRest(): void {
    if (!this.maySend()) return;
    const now = this.ports.now().getTime();
    this.restingSince ??= now;
    const left = Math.max(0, this.restingSince + draftTimes.longestRest - now);
    // While the server cannot be reached, the back-off decides, not each keystroke.
    if (this.failures > 0 && this.cancelSend) return;
    this.cancelSend?.();
    this.cancelSend = this.ports.schedule(() => this.sendNow(), Math.min(draftTimes.rest, left));
  }

  private sendNow(leaving = false): void {
    this.cancelSend?.();
    this.cancelSend = null;
    this.restingSince = null;
    if (this.closed && !leaving) return;
    if (this.onItsWay || !this.maySend()) return;
    if (!this.sending) {
      if (!this.unsent) return;
      this.sending = {
        basedOn: this.revision,
        title: this.title,
        doc: this.doc as Sending['doc'],
        written: { ...this.written },
        clockOffsetMs: this.ports.clockOffsetMs(),
        saveId: this.ports.newId(),
      };
      // Its saveId has to outlive a crash between commit and reply, or our own save would look like someone else's.
      void this.keepNow();
    }
    const body = this.sending;
    this.onItsWay = true;
    if (this.failures === 0) this.status = { kind: 'kept', why: 'sending' };
    this.tell();
    this.ports.send(body, leaving).then(
      (reply) => this.settle(body, reply),
      () => this.settle(body, { kind: 'unreachable' }),
    );
  }

  private settle(body: Sending, reply: SaveReply): void {
    this.onItsWay = false;
    if (reply.kind === 'saved') this.acknowledged(body, reply);
    else if (reply.kind === 'unreachable') this.tryAgain(null);
    else this.refused(body, reply);
    this.tell();
  }

  private acknowledged(body: Sending, reply: Extract<SaveReply, { kind: 'saved' }>): void {
    this.failures = 0;
    this.sending = null;
    this.revision = Math.max(this.revision, reply.revision);
    this.stamps = reply.stamps;
    for (const [id, at] of Object.entries(body.written)) if (this.written[id] === at) delete this.written[id];
    if (reply.build !== null && reply.build !== this.start.build) this.outdated = true;
    if (body.doc === this.doc && body.title === this.title) {
      this.unsent = false;
      this.cancelKeep?.();
      this.cancelKeep = null;
      this.status = { kind: 'saved', at: reply.savedAt };
      this.ports.forget().catch(() => this.setKeeps(false));
      this.answer(true);
    } else {
      this.status = { kind: 'kept', why: 'resting' };
      this.keepSoon();
      if (this.waiting.size > 0) this.sendNow();
      else this.sendAfterRest();
    }
  }

  private refused(body: Sending, reply: Extract<SaveReply, { kind: 'refused' }>): void {
    const { code, current, message } = reply;
    if (code === 'conflict' && current) {
      if (sameDocument(current.doc, this.doc) && current.title === this.title) {
        const saved = {
          kind: 'saved',
          revision: current.revision,
          savedAt: current.savedAt,
          stamps: current.stamps,
          build: null,
        } as const;
        return this.acknowledged({ ...body, doc: this.doc as Sending['doc'], title: this.title }, saved);
      }
      this.sending = null;
      this.status = { kind: 'conflict', current };
      void this.keepNow();
      return this.answer(false);
    }
    if (code === 'signed_out' || code === 'renewal_needed') {
      this.status = { kind: 'signed-out' };
      return this.answer(false);
    }
    if (code === 'frozen') {
      this.sending = null;
      this.status = { kind: 'frozen', message };
      return this.answer(false);
    }
    const passing: string[] = ['too_many', 'unavailable', 'internal', 'storage_full'];
    if (passing.includes(code)) return this.tryAgain(reply.retryAfterMs);
    this.sending = null;
    this.status = { kind: 'refused', message };
    this.answer(false);
  }

  private tryAgain(afterMs: number | null): void {
    this.failures += 1;
    this.status = { kind: 'kept', why: 'unreachable' };
    const wait = Math.min(draftTimes.firstRetry * 2 ** (this.failures - 1), draftTimes.longestRetry);
    this.cancelSend?.();
    if (!this.closed) this.cancelSend = this.ports.schedule(() => this.sendNow(), Math.max(wait, afterMs ?? 0));
    this.answer(false);
  }

  private answer(saved: boolean): void {
    for (const resolve of this.waiting) resolve(saved);
    this.waiting.clear();
  }

  private look(): DraftSnapshot {
    const { status, revision, unsent, keeps, outdated, stamps, written } = this;
    return { status, revision, unsent, keeps, outdated, stamps, written: { ...written } };
  }

  private tell(): void {
    this.snapshot = this.look();
    for (const listener of this.listeners) listener();
  }
}
