import { existsSync, statfsSync } from 'node:fs';
import fs from 'node:fs/promises';
import os from 'node:os';
import path from 'node:path';

// Every close of a database flushes some thousand files; in memory that costs nothing, and what a test of crashes of a
// process asks of the folder is the same. What must reach a disk is asked for in tests/faults/12.
const folder = roomInMemory() > 4e9 ? '/dev/shm' : os.tmpdir();

function roomInMemory(): number {
  if (!existsSync('/dev/shm')) return 0;
  const { bavail, bsize } = statfsSync('/dev/shm');
  return bavail * bsize;
}

/** A new folder for a test's data; whoever makes it removes it. */
export const temporaryFolder = (purpose: string): Promise<string> =>
  fs.mkdtemp(path.join(folder, `kelvinleaf-${purpose}-`));
