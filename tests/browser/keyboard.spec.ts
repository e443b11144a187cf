import { expect, test, type Locator, type Page } from '@playwright/test';
import { demoPassword, mailOf, watch, windowOf } from './people';
import { below, newEntry, saved, text, value } from './sheet';

/** The main job without a mouse: only keys, and only places that Tab reaches. */

const title = `Keys only ${Date.now().toString(36)}`;
let address = '';

/** Presses Tab until the place has the focus; a place that Tab does not reach fails here. */
async function tabTo(page: Page, place: Locator, longest = 80): Promise<void> {
  for (let presses = 0; presses < longest; presses += 1) {
    if (await place.evaluate((element) => element === document.activeElement).catch(() => false)) return;
    await page.keyboard.press('Tab');
  }
  await expect(place, `Tab reaches it within ${longest} presses`).toBeFocused({ timeout: 1 });
}

test.describe.configure({ mode: 'serial' });

test('an author signs in, begins an entry, writes, and signs', async ({ browser }) => {
  const context = await browser.newContext({ viewport: { width: 1280, height: 900 } });
  const page = await context.newPage();
  const said = watch(page);
  await page.goto('/sign-in');
  await tabTo(page, page.getByLabel('E-mail address'));
  await page.keyboard.type(mailOf('tomas'));
  await page.keyboard.press('Tab');
  await page.keyboard.type(demoPassword);
  await page.keyboard.press('Enter');
  await expect(page.getByRole('heading', { level: 1, name: 'Today' })).toBeVisible();

  await page.keyboard.press('Tab');
  await expect(page.getByRole('link', { name: 'Skip to the content' })).toBeFocused();
  await expect(page.getByRole('link', { name: 'Skip to the content' })).toBeInViewport();
  await page.keyboard.press('Enter');
  await tabTo(page, page.getByRole('link', { name: 'New entry' }), 3);
  await page.keyboard.press('Enter');
  const book = page.getByRole('main').getByRole('link', { name: /^NB-03/ });
  await expect(book).toBeVisible();
  await tabTo(page, book);
  await page.keyboard.press('Enter');
  await expect(page.getByLabel('Title')).toBeFocused();
  await page.keyboard.type(title);
  await page.keyboard.press('Enter');
  await expect(text(page)).toBeVisible();
  address = new URL(page.url()).pathname;

  const acknowledge = page.getByRole('button', { name: 'I have read this' });
  await tabTo(page, acknowledge);
  await page.keyboard.press('Enter');
  await expect(page.getByText('Read and acknowledged')).toContainText('Tomas Reinholt');
  await saved(page);

  // The cursor goes to the end; what is written there stands below "What next".
  await page.goto(address);
  await expect(text(page)).toBeVisible();
  await tabTo(page, text(page));
  await page.keyboard.press('Control+End');
  await page.keyboard.type('By keys. /val');
  const menu = page.getByRole('listbox', { name: 'Insert' });
  await expect(menu.getByRole('option', { name: /^Value/ })).toHaveAttribute('aria-selected', 'true');
  await page.keyboard.press('Enter');
  await expect(page.getByLabel('Value: symbol = expression')).toBeFocused();
  await page.keyboard.type('V_set = 620.0(5) mV');
  await page.keyboard.press('Enter');
  await expect(value(page, 'V_set')).toContainText('620');
  await page.keyboard.press('Control+;');
  await page.keyboard.type('Gate ramped.');
  await expect(page.locator('.log-line')).toContainText('Gate ramped.');
  await expect(below(page, 'What next')).toContainText('By keys.');
  await saved(page);

  // The way out of the text, and its opposite: without Escape, Tab belongs to the text where it has a use there.
  await page.keyboard.press('Escape');
  await page.keyboard.press('Tab');
  await expect(text(page)).not.toBeFocused();

  await page.keyboard.press('?');
  const keys = page.getByRole('dialog', { name: 'Keys' });
  await expect(keys).toContainText('Ctrl+;');
  await page.keyboard.press('Escape');
  await expect(keys).toHaveCount(0);

  await page.keyboard.press('Control+k');
  await expect(page.getByRole('combobox', { name: 'Find or do' })).toBeFocused();
  await page.keyboard.type('Repeat of day two');
  await expect(page.getByRole('option', { name: /^Repeat of day two/ })).toHaveAttribute('aria-selected', 'true');
  await page.keyboard.press('Enter');
  await expect(page.getByRole('heading', { level: 1, name: /^Repeat of day two/ })).toBeVisible();

  await page.keyboard.press('Control+k');
  await page.keyboard.type(title);
  await expect(page.getByRole('option', { name: new RegExp(`^${title}`) })).toHaveAttribute('aria-selected', 'true');
  await page.keyboard.press('Enter');
  await expect(text(page)).toBeVisible();
  await expect(value(page, 'V_set')).toBeVisible();
  await tabTo(page, page.getByRole('complementary', { name: 'Provenance' }).getByRole('button', { name: 'Sign' }));
  await page.keyboard.press('Enter');
  await expect(page.getByRole('heading', { level: 1, name: /^Sign leaf/ })).toBeVisible();
  await tabTo(page, page.getByLabel('Priya Menon'));
  await page.keyboard.press('Space');
  await expect(page.getByLabel('Priya Menon')).toBeChecked();
  await tabTo(page, page.getByLabel('Your password, again'));
  await page.keyboard.type(demoPassword);
  await expect(page.getByRole('button', { name: /^Sign version/ })).toBeEnabled();
  await page.keyboard.press('Enter');
  await expect(page.getByText('signed, waits for countersignature')).toBeVisible();
  expect(said).toEqual([]);
  await context.close();
});

test('a witness finds it in the queue, reads, and countersigns', async ({ browser }) => {
  const { context, page } = await windowOf(browser, 'priya', { viewport: { width: 1280, height: 900 } });
  await page.goto('/countersign');
  await tabTo(page, page.getByRole('link', { name: title }));
  await page.keyboard.press('Enter');
  await expect(page.getByRole('heading', { level: 1, name: title })).toBeVisible();
  const bound = page.getByRole('button', { name: /^value V_set/ });
  await tabTo(page, bound);
  await page.keyboard.press('Enter');
  await expect(page.getByRole('heading', { name: 'Where this value comes from' })).toBeVisible();
  await tabTo(
    page,
    page.getByRole('complementary', { name: 'Provenance' }).getByRole('link', { name: 'Countersign', exact: true }),
  );
  await page.keyboard.press('Enter');
  await tabTo(page, page.getByLabel('Your password, again'));
  await page.keyboard.type(demoPassword);
  await expect(page.getByRole('button', { name: /^Countersign version/ })).toBeEnabled();
  await page.keyboard.press('Enter');
  await expect(page.getByText('signed and countersigned')).toBeVisible();
  await context.close();
});

test('typing after Tab into a cooldown day leaves the caution where it stands', async ({ browser }) => {
  const { context, page } = await windowOf(browser, 'tomas');
  await newEntry(page, 'NB-03', 'The caution stays', 'Cooldown day');
  await expect(page.getByRole('note', { name: 'Caution' })).toBeVisible();
  await tabTo(page, text(page));
  await page.keyboard.type('Typed at once. ');
  await expect(text(page)).toContainText('Typed at once.');
  await expect(page.getByRole('note', { name: 'Caution' })).toBeVisible();
  await saved(page);
  await context.close();
});
