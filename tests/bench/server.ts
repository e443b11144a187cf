import { spawn } from 'node:child_process';
import { createServer } from 'node:net';

/** A server of the production build on a free port, as `npm start` runs it. */
export type BenchServer = {
  base: string;
  /** Signs in as one of the demonstration's people; gives the cookie. */
  signIn: (name: string) => Promise<string>;
  stop: () => Promise<void>;
};

export const password = 'cold-finger-demo';

function freePort(): Promise<number> {
  return new Promise((resolve, reject) => {
    const probe = createServer();
    probe.once('error', reject);
    probe.listen(0, '127.0.0.1', () => {
      const address = probe.address();
      probe.close(() => resolve(typeof address === 'object' && address ? address.port : 0));
    });
  });
}

/** @throws Error with the server's last words where it does not answer within five minutes (it may have to build first). */
export async function startServer(dataDir: string): Promise<BenchServer> {
  const port = await freePort();
  const base = `http://localhost:${port}`;
  const child = spawn(process.execPath, ['server/commands/start.mjs'], {
    cwd: process.cwd(),
    stdio: ['ignore', 'pipe', 'pipe'],
    env: { ...process.env, PORT: String(port), BASE_URL: base, DATA_DIR: dataDir, DEMO: 'on', NODE_ENV: 'production' },
  });
  let said = '';
  for (const stream of [child.stdout, child.stderr])
    stream.on('data', (part: Buffer) => (said = (said + part.toString('utf8')).slice(-4000)));
  const ended = new Promise<void>((resolve) => child.once('exit', () => resolve()));
  const stop = async () => {
    child.kill('SIGTERM');
    await ended;
  };
  for (let tries = 0; ; tries += 1) {
    if (child.exitCode !== null) throw new Error(`The server ended before it answered. It said: ${said}`);
    const answer = await fetch(`${base}/sign-in`).catch(() => null);
    if (answer?.ok) break;
    if (tries > 1200) {
      await stop();
      throw new Error(`The server did not answer. It said: ${said}`);
    }
    await new Promise((resolve) => setTimeout(resolve, 250));
  }
  const signIn = async (name: string) => {
    const response = await fetch(`${base}/api/auth/sign-in`, {
      method: 'POST',
      headers: { 'content-type': 'application/json', origin: base },
      body: JSON.stringify({ email: `${name}@fjordheim.example`, password }),
    });
    if (!response.ok) throw new Error(`Signing in as ${name} failed: ${response.status} ${await response.text()}`);
    return response.headers
      .getSetCookie()
      .map((cookie) => cookie.split(';')[0])
      .join('; ');
  };
  return { base, signIn, stop };
}

/** Address of the entry whose title begins like this, from the page of its notebook. */
export async function entryNamed(server: BenchServer, cookie: string, code: string, title: string): Promise<string> {
  const page = await fetch(`${server.base}/notebooks/${code}`, { headers: { cookie } });
  const links = (await page.text()).matchAll(/<a[^>]*href="(\/entries\/[^"/]+)"[^>]*>(.*?)<\/a>/gs);
  for (const [, href, words] of links) if (href && words?.replace(/<[^>]*>/g, '').startsWith(title)) return href;
  throw new Error(`Notebook ${code} has no entry “${title}”.`);
}

export function quantile(times: number[], share: number): number {
  const sorted = [...times].sort((a, b) => a - b);
  return sorted[Math.min(sorted.length - 1, Math.floor(sorted.length * share))] ?? NaN;
}

/** Milliseconds until the first bytes of a page's text have arrived, and until all of it has. */
export async function timeOfPage(url: string, cookie: string): Promise<{ first: number; whole: number }> {
  const start = performance.now();
  const response = await fetch(url, { headers: { cookie } });
  const reader = response.body?.getReader();
  if (!response.ok || !reader) throw new Error(`${url} answered ${response.status}.`);
  let first = NaN;
  const decoder = new TextDecoder();
  let text = '';
  for (let part = await reader.read(); !part.done; part = await reader.read()) {
    text += decoder.decode(part.value, { stream: true });
    // The sheet with its words, not the head of the document alone.
    if (Number.isNaN(first) && text.includes('class="sheet"')) first = performance.now() - start;
  }
  return { first, whole: performance.now() - start };
}
