import { randomUUID } from 'node:crypto';
import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import path from 'node:path';
import type { BenchRow } from './csv';
import { addNotebook } from './many-entries';
import { scriptBytes } from './scripts';
import { entryNamed, quantile, startServer, timeOfPage, type BenchServer } from './server';

export type PageRow = BenchRow & { bar?: number };

const noPeer = { peer: null, ratio: null };
/** Milliseconds that one kind of search may be asked for. */
const longestKind = 6000;

/** Times in ms and bytes of the pages of entries, of autosaving and of finding, on the production build. */
export async function benchPages(): Promise<PageRow[]> {
  const dataDir = mkdtempSync(path.join(tmpdir(), 'bench-pages-'));
  let server: BenchServer | null = null;
  const rows: PageRow[] = [];
  try {
    server = await startServer(dataDir);
    rows.push(...(await entryPages(server)), ...(await autosave(server)));
    await server.stop();
    const ofTen = await addNotebook(dataDir, 'BN-10', 10);
    const ofTenThousand = await addNotebook(dataDir, 'BN-10000', 10_000);
    server = await startServer(dataDir);
    rows.push(await opening(server, ofTen, 10), await opening(server, ofTenThousand, 10_000));
    rows.push(...(await finding(server, 10_000)));
    await server.stop();
    await addNotebook(dataDir, 'BN-90000', 90_000);
    server = await startServer(dataDir);
    rows.push(...(await finding(server, 100_000)));
    return rows;
  } finally {
    await server?.stop();
    rmSync(dataDir, { recursive: true, force: true });
  }
}

async function entryPages(server: BenchServer): Promise<PageRow[]> {
  const [reader, writer] = [await server.signIn('oskar'), await server.signIn('tomas')];
  const read = await entryNamed(server, reader, 'NB-03', 'Escape over the exit barrier, first');
  const written = await entryNamed(server, writer, 'NB-03', 'Escape at');
  const rows: PageRow[] = [];
  for (const [what, href, cookie] of [
    ['reader', read, reader],
    ['editor', written, writer],
  ] as const) {
    for (let i = 0; i < 5; i += 1) await timeOfPage(server.base + href, cookie);
    const times: number[] = [];
    for (let i = 0; i < 30; i += 1) times.push((await timeOfPage(server.base + href, cookie)).first);
    rows.push({
      name: `first content of the ${what}'s entry page, warm, median ms`,
      ours: quantile(times, 0.5),
      ...noPeer,
      n: times.length,
      bar: 150,
    });
  }
  rows.push({
    name: "script on the reader's entry page, gzip kB",
    ours: (await scriptBytes(server.base, read, reader)) / 1000,
    ...noPeer,
    n: 1,
    bar: 200,
  });
  rows.push({
    name: "script on the editor's entry page, gzip kB",
    ours: (await scriptBytes(server.base, written, writer)) / 1000,
    ...noPeer,
    n: 1,
    bar: 450,
  });
  return rows;
}

/** Twenty people's windows, each with its own entry: as in the browser a save follows 800 ms of rest, and without any rest for comparison. */
async function autosave(server: BenchServer): Promise<PageRow[]> {
  return [...(await autosaveWith(server, 800)), ...(await autosaveWith(server, 0))];
}

async function autosaveWith(server: BenchServer, restMs: number): Promise<PageRow[]> {
  const cookie = await server.signIn('tomas');
  const headers = { cookie, 'content-type': 'application/json', origin: server.base };
  const send = async <T>(method: string, url: string, body: unknown): Promise<T> => {
    const response = await fetch(server.base + url, { method, headers, body: JSON.stringify(body) });
    if (!response.ok) throw new Error(`${method} ${url} answered ${response.status}: ${await response.text()}`);
    return (await response.json()) as T;
  };
  const writers = 20;
  const saves = 15;
  const entries = await Promise.all(
    Array.from({ length: writers }, (_, i) =>
      send<{ id: string }>('POST', '/api/notebooks/NB-03/entries', {
        title: `Measured saving ${i}`,
        workDate: new Date().toISOString().slice(0, 10),
        cooldownId: null,
        deviceIds: [],
        layout: 'empty',
        requestKey: randomUUID(),
      }),
    ),
  );
  const times: number[] = [];
  await Promise.all(
    entries.map(async ({ id }) => {
      const draft = await fetch(`${server.base}/api/entries/${id}/draft`, { headers });
      let { revision } = (await draft.json()) as { revision: number };
      for (let i = 0; i < saves; i += 1) {
        const words = 'The bath stands at 4.21 K and the level falls as it should. '.repeat(20 + i);
        const lines = Array.from({ length: 20 }, (_, n) => ({
          type: 'paragraph',
          attrs: { id: `block_${n}_of_20` },
          content: [{ type: 'text', text: n === 0 ? words : `Line ${n} as it was.` }],
        }));
        if (restMs > 0) await new Promise((resolve) => setTimeout(resolve, restMs * (0.5 + Math.random())));
        const start = performance.now();
        const saved = await send<{ revision: number }>('PUT', `/api/entries/${id}/draft`, {
          basedOn: revision,
          title: `Measured saving`,
          doc: { type: 'doc', content: lines },
          written: { block_0_of_20: new Date().toISOString() },
          clockOffsetMs: 0,
          saveId: randomUUID(),
        });
        times.push(performance.now() - start);
        revision = saved.revision;
      }
    }),
  );
  const row = {
    ...noPeer,
    n: times.length,
    note: restMs > 0 ? `${writers} writers, ${restMs} ms of rest` : `${writers} writers without rest`,
  };
  return [
    { name: 'autosave round trip, median ms', ours: quantile(times, 0.5), ...row },
    { name: 'autosave round trip, p95 ms', ours: quantile(times, 0.95), ...row, ...(restMs > 0 ? { bar: 100 } : {}) },
  ];
}

async function opening(server: BenchServer, id: string, n: number): Promise<PageRow> {
  const cookie = await server.signIn('tomas');
  const times: number[] = [];
  for (let i = 0; i < 35; i += 1) {
    const { first } = await timeOfPage(`${server.base}/entries/${id}`, cookie);
    if (i >= 5) times.push(first);
  }
  return {
    name: `opening an entry in a notebook of ${n} entries, median ms`,
    ours: quantile(times, 0.5),
    ...noPeer,
    n,
  };
}

async function finding(server: BenchServer, n: number): Promise<PageRow[]> {
  const cookie = await server.signIn('tomas');
  const ask = async (words: string): Promise<number> => {
    const start = performance.now();
    const response = await fetch(`${server.base}/api/find?q=${encodeURIComponent(words)}`, { headers: { cookie } });
    const { results } = (await response.json()) as { results: unknown[] };
    if (results.length === 0) throw new Error(`Nothing was found for “${words}”.`);
    return performance.now() - start;
  };
  // One entry, a few, one in ten, all of them.
  const kinds = {
    'a word of one entry': (i: number) => `run${1000 + i * 37}`,
    'two words of a few': (i: number) => `word${i * 11 + 3} helium`,
    'a word of every tenth': () => 'plateau',
    'a word of all': () => 'helium',
  };
  const rows: PageRow[] = [];
  for (const [kind, words] of Object.entries(kinds)) {
    await ask(words(0));
    const times: number[] = [];
    // Where one answer takes seconds, a few of them say enough.
    const begun = performance.now();
    while (times.length < 40 && performance.now() - begun < longestKind) times.push(await ask(words(times.length)));
    rows.push({
      name: `finding ${kind} among ${n} entries, p95 ms`,
      ours: quantile(times, 0.95),
      ...noPeer,
      n,
      bar: 50,
      note: `${times.length} questions`,
    });
  }
  return rows;
}
