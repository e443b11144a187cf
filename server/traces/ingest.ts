import 'server-only';
import { randomBytes } from 'node:crypto';
import fs from 'node:fs/promises';
import path from 'node:path';
import { Worker } from 'node:worker_threads';
import type { ParsedTrace } from '@/lib/trace-format/parsed-trace';
import { syncFolder } from '@/server/db/files';
import { report } from '@/server/diagnostics/report';
import { env } from '@/server/env/env';
import { blobPath } from './blobs';
import type { DerivedFacts, IngestResult, IngestTask } from './layout';
import { derivedForm, factsFile } from './layout';

/** Runs the ingest thread: one at a time, with limited memory and time. Its death is a sentence, never the server's. */

export type IngestLimits = { heapMb: number; seconds: number };
const usualLimits: IngestLimits = { heapMb: 256, seconds: 180 };

const holder = globalThis as typeof globalThis & { kelvinleafIngest?: Promise<unknown> };

export function derivedFolder(sha256: string): string {
  // blobPath has checked that this is a digest.
  return path.join(/* turbopackIgnore: true */ env().dataDir, 'columns', path.basename(blobPath(sha256)));
}

/** What is known of a parsed file, or null where it has not been parsed, or in an older form. */
export async function readFacts(sha256: string): Promise<ParsedTrace | null> {
  let text: string;
  try {
    text = await fs.readFile(factsFile(derivedFolder(sha256)), 'utf8');
  } catch (error) {
    if ((error as NodeJS.ErrnoException).code === 'ENOENT') return null;
    throw error;
  }
  const facts = JSON.parse(text) as DerivedFacts;
  return facts.form === derivedForm ? facts.trace : null;
}

/**
 * Parses a stored file into its derived files, unless they are there already.
 * @returns the parsed facts, or a sentence why the file cannot be read
 */
export async function ingestBlob(sha256: string, limits: IngestLimits = usualLimits): Promise<IngestResult> {
  const run = async (): Promise<IngestResult> => {
    const known = await readFacts(sha256);
    if (known) return { ok: true, trace: known };
    const target = derivedFolder(sha256);
    const parent = path.dirname(target);
    await fs.mkdir(parent, { recursive: true, mode: 0o700 });
    const draft = path.join(/* turbopackIgnore: true */ parent, `.${randomBytes(9).toString('hex')}.new`);
    await fs.mkdir(draft, { mode: 0o700 });
    try {
      const result = await runWorker({ source: blobPath(sha256), target: draft }, limits);
      if (result.ok) {
        await syncFolder(draft);
        // Derived files of an older form, or of another process that was as fast: the same bytes give the same files.
        await fs.rm(target, { recursive: true, force: true });
        await fs.rename(draft, target);
        await syncFolder(parent);
      }
      return result;
    } finally {
      await fs.rm(draft, { recursive: true, force: true });
    }
  };
  const turn = (holder.kelvinleafIngest ?? Promise.resolve()).then(run, run);
  holder.kelvinleafIngest = turn.catch(() => undefined);
  return turn;
}

function workerFile(): string {
  return path.join(/* turbopackIgnore: true */ process.cwd(), 'dist', 'workers', 'ingest-worker.mjs');
}

async function runWorker(task: IngestTask, limits: IngestLimits): Promise<IngestResult> {
  const file = workerFile();
  await fs.access(file).catch((cause: unknown) => {
    throw new Error('The ingest thread is not built: run `node server/commands/build-workers.mjs`.', { cause });
  });
  const worker = new Worker(file, {
    workerData: task,
    resourceLimits: { maxOldGenerationSizeMb: limits.heapMb, maxYoungGenerationSizeMb: Math.min(32, limits.heapMb) },
    // Nothing of the server's environment or its secrets is the parser's business.
    env: {},
  });
  const died = (detail: string, error?: unknown): IngestResult => {
    report('ingest thread died', { detail }, error);
    return {
      ok: false,
      problem: `Reading the file ${detail}, so it was stopped; nothing else is affected. Its bytes are kept. Check that it is a table of numbers in text, and attach a corrected file.`,
    };
  };
  return new Promise((resolve) => {
    let late = false;
    const timer = setTimeout(() => {
      late = true;
      void worker.terminate();
    }, limits.seconds * 1000);
    let settled = false;
    const settle = (result: IngestResult) => {
      settled = true;
      clearTimeout(timer);
      resolve(result);
    };
    worker.on('message', (result: IngestResult) => settle(result));
    worker.on('error', (error: Error & { code?: string }) => {
      if (error.code === 'ERR_WORKER_OUT_OF_MEMORY') settle(died('needed more memory than is allowed', error));
      else if (error.code === 'ENOSPC')
        settle({
          ok: false,
          problem:
            'The disk is full: the file is kept, but its columns could not be written. Make room and read it again.',
        });
      else settle(died('failed unexpectedly', error));
    });
    worker.on('exit', () => {
      if (settled) return;
      settle(died(late ? `took longer than ${limits.seconds} s` : 'ended without a result'));
    });
  });
}
