import { expect, test, type Page } from '@playwright/test';
import { demoPassword, mailOf, windowOf } from './people';
import { attach, newEntry, saved, saveWords, text, textFile, traceOf, writeValue } from './sheet';

/** Wrong files, wrong lines, lost sessions and lost windows: each is said in a sentence, and nothing typed is lost. */

// The smallest valid PNG: one pixel (PNG specification, third edition, W3C 2025: signature, IHDR, IDAT, IEND).
const png = Buffer.from(
  'iVBORw0KGgoAAAANSUhEUgAAAAEAAAABCAYAAAAfFcSJAAAADUlEQVR42mNk+M9QDwADhgGAWjR9awAAAABJRU5ErkJggg==',
  'base64',
);

async function freshSheet(page: Page, title: string): Promise<string> {
  const address = await newEntry(page, 'NB-03', title, 'Empty');
  await text(page).click();
  await page.keyboard.type('Typed before.');
  await saved(page);
  return address;
}

/** What a clipboard holds arrives at the text as a paste. */
async function paste(page: Page, parts: { type: string; text: string }[], pictures: string[] = []): Promise<void> {
  await text(page).evaluate(
    (element, { parts: texts, pictures: encoded }) => {
      const data = new DataTransfer();
      for (const part of texts) data.setData(part.type, part.text);
      for (const one of encoded) {
        const bytes = Uint8Array.from(atob(one), (letter) => letter.charCodeAt(0));
        data.items.add(new File([bytes], 'image.png', { type: 'image/png' }));
      }
      element.dispatchEvent(new ClipboardEvent('paste', { clipboardData: data, bubbles: true, cancelable: true }));
    },
    { parts, pictures },
  );
}

test('files that are no traces are named, refused or kept unread, and the text stays', async ({ browser }) => {
  const { context, page } = await windowOf(browser, 'tomas', { viewport: { width: 1280, height: 900 } });
  await freshSheet(page, 'Wrong files');
  const list = page.getByRole('list', { name: 'Files on their way' });

  await attach(page, [{ name: 'empty.csv', mimeType: 'text/csv', buffer: Buffer.alloc(0) }]);
  await expect(list).toContainText('empty.csv is empty: it has no bytes. Nothing was sent.');
  await list.getByRole('button', { name: 'Leave it out' }).click();
  await expect(list).toHaveCount(0);

  await attach(page, [{ name: 'picture.csv', mimeType: 'text/csv', buffer: png }]);
  await expect(traceOf(page, 'picture.csv')).toContainText(
    'The file is a PNG picture, not a table of numbers in text.',
  );
  await expect(traceOf(page, 'picture.csv')).toContainText('Its bytes are kept');

  await attach(page, [textFile('prose.txt', 'The helium was low today.\nWe stopped early.\n')]);
  await expect(traceOf(page, 'prose.txt')).toContainText('The file holds no line of numbers. Its bytes are kept');

  await attach(page, [textFile('ragged.csv', 't (s),I (pA)\n0,1\n1,2,3\n2\n3,4\n')]);
  await expect(traceOf(page, 'ragged.csv')).toContainText(/Line 3 .*Correct it and attach the file again\./);

  await attach(page, [textFile('furlong.csv', 't (s),y (furlong)\n0,1\n1,2\n')]);
  const furlong = traceOf(page, 'furlong.csv');
  await expect(furlong.getByLabel('Unit', { exact: true }).nth(1)).toHaveAccessibleDescription(/furlong/);

  await expect(text(page)).toContainText('Typed before.');
  await saved(page);
  await context.close();
});

test('a line that cannot be calculated says why beside it, and stays as typed', async ({ browser }) => {
  const { context, page } = await windowOf(browser, 'tomas');
  const address = await freshSheet(page, 'Wrong lines');
  await page.keyboard.press('Enter');
  await writeValue(page, 'a = 1 V');
  await writeValue(page, 'zero = a - a');
  await writeValue(page, 'q = a/zero');
  await writeValue(page, 'p = r + 1');
  await writeValue(page, 'r = p + 1');
  await writeValue(page, 'w = 3 furlong');
  await writeValue(page, 's = a + 1 A');
  const wrong = page.locator('.value-error');
  await expect(wrong).toHaveCount(5);
  await expect(wrong.filter({ hasText: 'q = a/zero' })).toContainText(/zero/i);
  await expect(wrong.filter({ hasText: 'p = r + 1' })).toContainText(/circle|circular|itself/i);
  await expect(wrong.filter({ hasText: 'w = 3 furlong' })).toContainText('furlong');
  await expect(wrong.filter({ hasText: 's = a + 1 A' })).toContainText(/unit|V|A/);
  await expect(page.getByText(/NaN|Infinity|undefined/)).toHaveCount(0);
  await saved(page);
  await page.goto(address);
  await expect(page.locator('.value-error')).toHaveCount(5);
  await expect(text(page)).toContainText('Typed before.');
  await context.close();
});

test('a paste of 20 000 characters arrives whole', async ({ browser }) => {
  const { context, page } = await windowOf(browser, 'tomas');
  const address = await freshSheet(page, 'A long paste');
  const long = Array.from({ length: 200 }, (_, i) =>
    `${String(i).padStart(4, '0')} ${'helium '.repeat(14)}`.slice(0, 99),
  ).join('\n');
  expect(long.length).toBeGreaterThan(19_900);
  await paste(page, [{ type: 'text/plain', text: long }]);
  await expect(text(page)).toContainText('0199 helium');
  await saved(page);
  await page.goto(address);
  await expect(text(page)).toContainText('Typed before.');
  await expect(text(page)).toContainText('0199 helium');
  const kept = await text(page).textContent();
  expect(kept!.match(/helium/g)!.length).toBe(long.match(/helium/g)!.length);
  await context.close();
});

test('cells of a spreadsheet become a table, an image of the clipboard a picture', async ({ browser }) => {
  const { context, page } = await windowOf(browser, 'tomas');
  const address = await freshSheet(page, 'Pasted things');
  await page.keyboard.press('Enter');
  await paste(page, [{ type: 'text/plain', text: 'V / mV\tI / pA\n-620\t32.04\n-610\t31.9\n' }]);
  const table = page.locator('.entry-text table');
  await expect(table.getByRole('row')).toHaveCount(3);
  await expect(table.getByRole('columnheader')).toHaveText(['V / mV', 'I / pA']);
  await expect(table.getByRole('cell', { name: '32.04' })).toBeVisible();
  await page.keyboard.press('Control+End');
  await paste(page, [], [png.toString('base64')]);
  const picture = page.locator('.picture img');
  await expect(picture).toBeVisible();
  await page.getByLabel('what it shows, for those who cannot see it').fill('one pixel');
  await saved(page);
  await page.goto(address);
  await expect(page.getByRole('img', { name: 'one pixel' })).toBeVisible();
  expect(await page.locator('.picture img').evaluate((image: HTMLImageElement) => image.naturalWidth)).toBe(1);
  await expect(page.locator('.entry-text table').getByRole('row')).toHaveCount(3);
  await context.close();
});

test('a wrong password and spent or made-up links get a sentence, and the address stays', async ({ browser }) => {
  const { context, page } = await windowOf(browser, null);
  await page.goto('/sign-in');
  await page.getByLabel('E-mail address').fill(mailOf('oskar'));
  await page.getByLabel('Password', { exact: true }).fill('not this one');
  await page.getByRole('button', { name: 'Sign in' }).click();
  await expect(page.getByText('E-mail address or password is not right. Nothing is lost; try again.')).toBeVisible();
  await expect(page.getByLabel('E-mail address')).toHaveValue(mailOf('oskar'));

  await page.goto('/join?token=made-up');
  await expect(page.getByText(/expired|used|not known|no longer/i)).toBeVisible();

  await page.goto('/reset?token=made-up');
  await page.getByLabel('New password').fill('long enough to be one');
  await page.getByRole('button', { name: 'Set the password' }).click();
  await expect(page.getByText('This link has expired or was used already. Ask for a new one.')).toBeVisible();
  await expect(page.getByLabel('New password')).toHaveValue('long enough to be one');
  await context.close();
});

/** Everything that this browser keeps unsent, as text; runs in the page. */
function keptTexts(): Promise<string> {
  return new Promise((resolve, reject) => {
    const opening = indexedDB.open('kelvinleaf-drafts');
    opening.onerror = () => reject(opening.error);
    opening.onsuccess = () => {
      const table = opening.result.objectStoreNames[0];
      const reading = opening.result.transaction(table).objectStore(table).getAll();
      reading.onerror = () => reject(reading.error);
      reading.onsuccess = () => {
        opening.result.close();
        resolve(JSON.stringify(reading.result));
      };
    };
  });
}

test('fault 24: a window that crashed before sending gives its text back', async ({ browser }) => {
  const { context, page } = await windowOf(browser, 'tomas');
  const address = await freshSheet(page, 'A crash');
  await page.route('**/api/entries/*/draft', (route) => route.abort());
  await page.keyboard.type(' Never sent.');
  await expect(saveWords(page)).toContainText('kept in this browser, not yet on the server');
  // What is typed is in the browser's own store within a tenth of a second; the crash comes after that, not within it.
  await expect.poll(() => page.evaluate(keptTexts)).toContain('Never sent.');
  // The process of the window dies: nothing runs, nothing is sent, nothing says goodbye.
  const gone = page.waitForEvent('crash');
  const debug = await context.newCDPSession(page);
  debug.send('Page.crash').catch(() => undefined);
  await gone;
  const again = await context.newPage();
  await again.goto(address);
  await expect(again.getByText(/Text that had not reached the server.*was taken up again/)).toBeVisible();
  await expect(text(again)).toContainText('Typed before. Never sent.');
  await saved(again);
  await context.close();
});

test('fault 25: what one window saves shows in the other that has nothing unsent', async ({ browser }) => {
  const { context, page } = await windowOf(browser, 'tomas');
  const address = await freshSheet(page, 'Two windows');
  const other = await context.newPage();
  await other.goto(address);
  await text(other).click();
  await other.keyboard.press('Control+End');
  await other.keyboard.type(' From the other.');
  await saved(other);
  await expect(text(page)).toContainText('Typed before. From the other.');
  await context.close();
});

test('fault 27: a session that ends while somebody writes is renewed in place, and the text arrives', async ({
  browser,
}) => {
  const { context, page } = await windowOf(browser, 'tomas');
  const address = await freshSheet(page, 'A session that ends');
  const cookies = await context.cookies();
  await context.clearCookies();
  await page.keyboard.type(' After the end.');
  await expect(saveWords(page)).toHaveText('your session has ended; the text is kept in this browser');
  await page.getByRole('button', { name: 'Sign in again' }).click();
  const dialog = page.getByRole('dialog', { name: 'Sign in again' });
  await dialog.getByLabel('E-mail').fill(mailOf('tomas'));
  await dialog.getByLabel('Password').fill('wrong one');
  await dialog.getByRole('button', { name: 'Sign in' }).click();
  await expect(dialog.getByText(/not right/)).toBeVisible();
  await dialog.getByLabel('Password').fill(demoPassword);
  await dialog.getByRole('button', { name: 'Sign in' }).click();
  await expect(dialog).toHaveCount(0);
  await saved(page);
  await page.goto(address);
  await expect(text(page)).toContainText('Typed before. After the end.');
  expect(cookies.length).toBeGreaterThan(0);
  await context.close();
});

test('fault 28: a browser that keeps nothing says so, and the text still reaches the server', async ({ browser }) => {
  const { context, page } = await windowOf(browser, 'tomas');
  await page.addInitScript(() => {
    IDBFactory.prototype.open = () => {
      throw new DOMException('storage is switched off', 'SecurityError');
    };
  });
  const address = await newEntry(page, 'NB-03', 'No store', 'Empty');
  await text(page).click();
  await page.keyboard.type('Typed without a store.');
  await expect(page.getByRole('alert').filter({ hasText: 'This browser keeps nothing on its own' })).toBeVisible();
  await saved(page);
  await page.goto(address);
  await expect(text(page)).toContainText('Typed without a store.');
  await context.close();
});
