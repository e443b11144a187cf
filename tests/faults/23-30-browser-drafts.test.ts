import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest';
import { docOf, FakeServer, linesOf, pass, windowOn, type Kept } from './draft-world';

beforeEach(() => {
  vi.useFakeTimers({ now: new Date('2026-11-19T13:00:00Z') });
});
afterEach(() => {
  vi.useRealTimers();
});

describe('saving in fair weather', () => {
  it('keeps within 100 ms, sends after 800 ms of rest, clears its copy on acknowledgement', async () => {
    const server = new FakeServer();
    const { saver, store, type } = windowOn(server);
    type('one');
    await pass(100);
    expect(linesOf(store.kept!.doc)).toEqual(['one']);
    await pass(500);
    type('one two');
    await pass(799);
    expect(server.history).toHaveLength(0);
    await pass(20);
    expect(server.history.map(linesOf)).toEqual([['one two']]);
    expect(saver.read()).toMatchObject({ status: { kind: 'saved', at: '2026-11-19T13:03:22.000Z' }, unsent: false });
    expect(store.kept).toBeNull();
  });

  it('does not wait for ever on someone who never rests', async () => {
    const server = new FakeServer();
    const { type } = windowOn(server);
    for (let i = 0; i < 30; i += 1) {
      type(`word ${i}`);
      await pass(500);
    }
    expect(server.history.length).toBeGreaterThanOrEqual(1);
  });

  it('keeps its copy when more was typed while the save was on its way', async () => {
    const server = new FakeServer();
    server.delays = [500];
    const { saver, store, type } = windowOn(server);
    type('one');
    await pass(900);
    type('one two');
    await pass(450);
    expect(server.history.map(linesOf)).toEqual([['one']]);
    expect(saver.read().unsent).toBe(true);
    expect(linesOf(store.kept!.doc)).toEqual(['one two']);
    await pass(1000);
    expect(linesOf(server.draft)).toEqual(['one two']);
    expect(store.kept).toBeNull();
  });

  it('says when the server runs another build, and keeps saving (22)', async () => {
    const server = new FakeServer();
    server.build = 'b2';
    const { saver, type } = windowOn(server);
    type('one');
    await pass(1000);
    expect(saver.read().outdated).toBe(true);
    expect(linesOf(server.draft)).toEqual(['one']);
  });
});

describe('23 an hour offline', () => {
  it('all text arrives, with the time at which it was written', async () => {
    const server = new FakeServer();
    server.reachable = false;
    const { saver, store, type } = windowOn(server);
    type('one');
    await pass(60 * 60 * 1000);
    expect(saver.read().status).toEqual({ kind: 'kept', why: 'unreachable' });
    expect(linesOf(store.kept!.doc)).toEqual(['one']);
    server.reachable = true;
    saver.resume();
    await pass(50);
    expect(linesOf(server.draft)).toEqual(['one']);
    expect(saver.read().status.kind).toBe('saved');
  });

  it('backs off: few tries in an hour although someone types on', async () => {
    const server = new FakeServer();
    server.reachable = false;
    const { saver, type } = windowOn(server);
    const save = vi.spyOn(server, 'save');
    for (let i = 0; i < 360; i += 1) {
      type(`line ${i}`);
      await pass(10_000);
    }
    expect(save.mock.calls.length).toBeLessThan(140);
    server.reachable = true;
    await pass(31_000);
    await pass(2000);
    expect(linesOf(server.draft)).toEqual(['line 359']);
    expect(saver.read().unsent).toBe(false);
  });
});

describe('24 the tab crashes', () => {
  it('the next window takes up the text and sends it', async () => {
    const server = new FakeServer();
    server.reachable = false;
    const store = { kept: null as Kept | null };
    windowOn(server, store).type('written before the crash');
    await pass(150);
    server.reachable = true;
    const next = windowOn(server);
    next.saver.restore(store.kept!);
    await pass(1000);
    expect(linesOf(server.draft)).toEqual(['written before the crash']);
  });

  it('a save that was committed before the crash is no conflict with oneself', async () => {
    const server = new FakeServer();
    server.losesReplies = 1;
    const store = { kept: null as Kept | null };
    const first = windowOn(server, store);
    first.type('one');
    await pass(815);
    expect(server.revision).toBe(2);
    first.type('one two');
    await pass(101);
    const kept = store.kept!;
    first.saver.close();
    const next = windowOn(server);
    next.saver.restore(kept);
    await pass(3000);
    expect(next.saver.read().status.kind).toBe('saved');
    expect(linesOf(server.draft)).toEqual(['one two']);
  });
});

describe('25, 26 two windows, one paragraph', () => {
  it('the slower one gets both texts to compare, and nothing is overwritten', async () => {
    const server = new FakeServer();
    const a = windowOn(server);
    const b = windowOn(server);
    a.type('text of A');
    await pass(1000);
    b.type('text of B');
    await pass(1000);
    const { status } = b.saver.read();
    expect(status.kind === 'conflict' && linesOf(status.current.doc)).toEqual(['text of A']);
    expect(linesOf(server.draft)).toEqual(['text of A']);
    expect(linesOf(b.saver.text().doc)).toEqual(['text of B']);
    expect(linesOf(b.store.kept!.doc)).toEqual(['text of B']);
    b.type('text of B, longer');
    await pass(20_000);
    expect(linesOf(server.draft)).toEqual(['text of A']);
    b.saver.resolve('Escape, day two', docOf('text of A', 'text of B, longer'), ['block_1']);
    await pass(100);
    expect(linesOf(server.draft)).toEqual(['text of A', 'text of B, longer']);
    expect(b.saver.read().status.kind).toBe('saved');
  });

  it('equal texts are no conflict', async () => {
    const server = new FakeServer();
    const a = windowOn(server);
    const b = windowOn(server);
    a.type('same');
    b.type('same');
    await pass(2000);
    expect([a, b].map((w) => w.saver.read().status.kind)).toEqual(['saved', 'saved']);
  });

  it('a window with nothing unsent follows the other', async () => {
    const server = new FakeServer();
    const a = windowOn(server);
    const b = windowOn(server);
    a.type('text of A');
    await pass(1000);
    expect(b.saver.adopt(server.dto())).toBe(true);
    expect(linesOf(b.saver.text().doc)).toEqual(['text of A']);
    b.type('text of A and B');
    expect(b.saver.adopt(server.dto())).toBe(false);
    await pass(1000);
    expect(linesOf(server.draft)).toEqual(['text of A and B']);
  });
});

describe('27 the session ends while typing', () => {
  it('stops sending, keeps, and goes on after signing in again', async () => {
    const server = new FakeServer();
    server.signedIn = false;
    const { saver, store, type } = windowOn(server);
    type('one');
    await pass(1000);
    expect(saver.read().status.kind).toBe('signed-out');
    type('one two');
    await pass(60_000);
    expect(linesOf(store.kept!.doc)).toEqual(['one two']);
    server.signedIn = true;
    saver.resume();
    await pass(2000);
    expect(linesOf(server.draft)).toEqual(['one two']);
    expect(saver.read().status.kind).toBe('saved');
  });
});

describe('28 no IndexedDB', () => {
  it('says that nothing outlives the window, and still saves to the server', async () => {
    const server = new FakeServer();
    const { saver, type } = windowOn(server, { kept: null, works: false });
    type('one');
    await pass(150);
    expect(saver.read().keeps).toBe(false);
    await pass(1000);
    expect(linesOf(server.draft)).toEqual(['one']);
  });
});

describe('29 the reply is lost ten times', () => {
  it('makes one revision', async () => {
    const server = new FakeServer();
    server.losesReplies = 10;
    const { saver, type } = windowOn(server);
    type('one');
    await pass(10 * 60 * 1000);
    expect(server.history.map(linesOf)).toEqual([['one']]);
    expect(server.revision).toBe(2);
    expect(saver.read().status.kind).toBe('saved');
  });
});

describe('30 autosaves out of order', () => {
  it('never has two on the way, and the newest text is last', async () => {
    const server = new FakeServer();
    server.delays = [5000, 10, 3000, 10];
    const { type } = windowOn(server);
    for (let i = 0; i < 10; i += 1) {
      type(`text ${i}`);
      await pass(1000);
    }
    await pass(30_000);
    expect(server.mostUnderway).toBe(1);
    expect(linesOf(server.draft)).toEqual(['text 9']);
    const order = server.history.map((doc) => Number(linesOf(doc)[0]!.slice(5)));
    expect(order).toEqual([...order].sort((a, b) => a - b));
  });

  it('flush resolves when the server holds the newest text', async () => {
    const server = new FakeServer();
    server.delays = [2000, 10];
    const { saver, type } = windowOn(server);
    type('one');
    await pass(900);
    type('one two');
    const flushed = saver.flush();
    await pass(3000);
    expect(await flushed).toBe(true);
    expect(linesOf(server.draft)).toEqual(['one two']);
  });
});
