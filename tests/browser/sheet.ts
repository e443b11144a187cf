import { expect, type Locator, type Page } from '@playwright/test';

/** Acts of a writer on the sheet, by what a person sees and presses. */

export const text = (page: Page): Locator => page.getByRole('textbox', { name: /^Text of the entry/ });

/** The line of the sheet below a heading. */
export const below = (page: Page, heading: string): Locator =>
  page.locator('.entry-text > h2', { hasText: new RegExp(`^${heading}$`) }).locator('xpath=following-sibling::*[1]');

export const saveWords = (page: Page): Locator => page.locator('.save-words');

/** The server has everything that was typed so far. */
export async function saved(page: Page): Promise<void> {
  await expect(saveWords(page)).toHaveText(/^saved \d\d:\d\d:\d\d$/);
}

export async function writeBelow(page: Page, heading: string, words: string): Promise<void> {
  await below(page, heading).click();
  await page.keyboard.type(words);
}

/** Takes the next leaf of a notebook and waits until the sheet can be written on. */
export async function newEntry(page: Page, notebook: string, title: string, layout: 'Cooldown day' | 'Empty') {
  await page.goto(`/notebooks/${notebook}/new`);
  await page.getByLabel('Title').fill(title);
  const choice = page.getByLabel('Layout');
  await choice.selectOption(layout === 'Empty' ? 'empty' : 'cooldown-day');
  await page.getByRole('button', { name: 'Take the next leaf' }).click();
  await expect(text(page)).toBeVisible();
  return new URL(page.url()).pathname;
}

export type FileToChoose = { name: string; mimeType: string; buffer: Buffer };
export const textFile = (name: string, words: string): FileToChoose => ({
  name,
  mimeType: 'text/csv',
  buffer: Buffer.from(words),
});

/** Chooses files through the toolbar's Trace button. */
export async function attach(page: Page, files: FileToChoose[] | string[]): Promise<void> {
  const opened = page.waitForEvent('filechooser');
  await page.getByRole('toolbar', { name: 'Writing' }).getByRole('button', { name: 'Trace', exact: true }).click();
  await (await opened).setFiles(files as string[]);
}

export const traceOf = (page: Page, fileName: string): Locator =>
  page.getByRole('region', { name: /^trace / }).filter({ has: page.locator('.trace-foot', { hasText: fileName }) });

/** A value by its key, written as a person types it; it stays at the end of the line where the cursor stands. */
export async function writeValue(page: Page, line: string): Promise<void> {
  await page.keyboard.press("Control+'");
  const field = page.getByLabel('Value: symbol = expression');
  await expect(field).toBeFocused();
  await field.pressSequentially(line);
  await field.press('Enter');
  await expect(field).toHaveCount(0);
  await page.keyboard.type(' ');
}

export const value = (page: Page, symbol: string): Locator =>
  page.locator('.value').and(page.locator(`[aria-label^="value ${symbol} ="]`));

/** `0.9191(47)` as a number, its standard uncertainty, and one step of the last digit shown. */
export function readResult(words: string): { value: number; u: number; step: number } {
  const match = /(-?[\d\u2009\s.]*\d)\((\d+)\)/.exec(words.replace('−', '-'));
  if (!match) throw new Error(`no result with an uncertainty in “${words}”`);
  const digits = match[1]!.replace(/[\u2009\s]/g, '');
  const step = 10 ** -(digits.split('.')[1] ?? '').length;
  return { value: Number(digits), u: Number(match[2]) * step, step };
}
