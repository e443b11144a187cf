import fs from 'node:fs/promises';
import os from 'node:os';
import path from 'node:path';
import { afterAll, beforeAll, expect, it } from 'vitest';
import { bundle, start } from './child';

let program: string;
let dataDir: string;
beforeAll(async () => {
  program = await bundle('saving-program');
  dataDir = await fs.mkdtemp(path.join(os.tmpdir(), 'kelvinleaf-kill-'));
});
afterAll(() => fs.rm(dataDir, { recursive: true, force: true }));

type Found = { numbers: string[]; title: string; revision: number; listed: string; replayed: number };

it('1 kill -9 in the middle of saving, ten times: the text is old or new, never half, and every acknowledged save is there', async () => {
  let acknowledged = 0;
  let saves = 0;
  for (let round = 0; round <= 10; round += 1) {
    const child = start(program, dataDir);
    const found = JSON.parse(await child.line('found')) as Found;
    const text = Number(found.title);
    // One text throughout, in the draft and in the lists.
    expect(found.numbers).toEqual([found.title]);
    expect(found.listed).toBe(found.title);
    expect(found.revision).toBe(text + 1);
    // Nothing acknowledged is missing; at most the one save that was under way came through unanswered.
    expect(text).toBeGreaterThanOrEqual(acknowledged);
    expect(text).toBeLessThanOrEqual(acknowledged + 1);
    await child.line('saved');
    await new Promise((resolve) => setTimeout(resolve, 13 + 41 * round));
    child.process.kill('SIGKILL');
    expect((await child.ended).signal).toBe('SIGKILL');
    const answered = child.lines.filter((line) => line.startsWith('saved '));
    saves += answered.length;
    acknowledged = Number(answered[answered.length - 1].slice('saved '.length));
  }
  // The last round's saves were looked at by nobody, so ten kills were judged, most of them after several saves.
  expect(saves).toBeGreaterThan(11);
});
