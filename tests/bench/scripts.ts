import { chromium } from '@playwright/test';
import { gzipSync } from 'node:zlib';
import { findChromium } from '../../server/commands/chromium.mjs';

/**
 * Bytes of script, gzip, that a browser with nothing kept receives for a page: those named in its HTML and those that it
 * fetches by itself until the network has been quiet.
 */
export async function scriptBytes(base: string, path: string, cookie: string): Promise<number> {
  const executablePath = findChromium();
  if (!executablePath) throw new Error('Chromium is not installed, so scripts cannot be counted.');
  const browser = await chromium.launch({ executablePath, args: ['--no-sandbox', '--disable-gpu'] });
  try {
    const context = await browser.newContext({ baseURL: base });
    await context.addCookies(
      cookie.split('; ').map((pair) => {
        const cut = pair.indexOf('=');
        return { name: pair.slice(0, cut), value: pair.slice(cut + 1), url: base };
      }),
    );
    const page = await context.newPage();
    const sizes: Promise<number>[] = [];
    page.on('response', (response) => {
      if (response.request().resourceType() !== 'script' && !/\.js(\?|$)/.test(response.url())) return;
      sizes.push(response.body().then((body) => gzipSync(body).length));
    });
    await page.goto(path, { waitUntil: 'networkidle' });
    await page.waitForTimeout(2000);
    return (await Promise.all(sizes)).reduce((a, b) => a + b, 0);
  } finally {
    await browser.close();
  }
}
