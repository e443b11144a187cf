import { spawn, type ChildProcess } from 'node:child_process';
import { createInterface } from 'node:readline';
import path from 'node:path';
import { build } from 'esbuild';

/** Bundles a program of this folder as server/commands/build.mjs does, so that it can be killed apart from the test. */
export async function bundle(name: string): Promise<string> {
  const root = path.resolve('.');
  const outfile = path.join(root, 'dist/faults', `${name}.mjs`);
  await build({
    entryPoints: [path.join(root, 'tests/faults', `${name}.ts`)],
    outfile,
    bundle: true,
    packages: 'external',
    platform: 'node',
    format: 'esm',
    target: 'node20',
    logLevel: 'warning',
    absWorkingDir: root,
    alias: { '@': root, 'server-only': path.join(root, 'tests/server-only.ts') },
  });
  return outfile;
}

export type Child = {
  process: ChildProcess;
  /** The next line that begins with `word`, without it; rejects when the process ends before. */
  line: (word: string) => Promise<string>;
  lines: string[];
  errors: () => string;
  ended: Promise<{ code: number | null; signal: NodeJS.Signals | null }>;
};

export function start(program: string, dataDir: string, args: string[] = []): Child {
  const child = spawn(process.execPath, [program, ...args], {
    env: { ...process.env, DATA_DIR: dataDir, DEMO: 'off', BASE_URL: 'http://localhost:3999' },
    stdio: ['ignore', 'pipe', 'pipe'],
  });
  const lines: string[] = [];
  let errors = '';
  const waiting: { word: string; resolve: (rest: string) => void; reject: (error: Error) => void }[] = [];
  createInterface({ input: child.stdout }).on('line', (line) => {
    lines.push(line);
    const at = waiting.findIndex(({ word }) => line.startsWith(`${word} `));
    if (at >= 0) waiting.splice(at, 1)[0].resolve(line.slice(line.indexOf(' ') + 1));
  });
  child.stderr.on('data', (chunk) => (errors += String(chunk)));
  const ended = new Promise<{ code: number | null; signal: NodeJS.Signals | null }>((resolve) =>
    child.on('close', (code, signal) => {
      for (const { word, reject } of waiting) reject(new Error(`ended before "${word}": ${errors}`));
      resolve({ code, signal });
    }),
  );
  return {
    process: child,
    lines,
    errors: () => errors,
    ended,
    line: (word) => {
      const known = lines.find((line) => line.startsWith(`${word} `));
      if (known) return Promise.resolve(known.slice(known.indexOf(' ') + 1));
      return new Promise((resolve, reject) => waiting.push({ word, resolve, reject }));
    },
  };
}
