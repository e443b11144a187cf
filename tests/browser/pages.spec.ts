import AxeBuilder from '@axe-core/playwright';
import { expect, test, type Browser, type Page } from '@playwright/test';
import { entryAddress, watch, windowOf } from './people';
import { pagesUnderTest, type PageUnderTest } from './pages';

/** The whole address of a page under test, with ids looked up in the demonstration notebook as a person finds them. */
async function addressOf(page: Page, { address }: PageUnderTest): Promise<string> {
  if (typeof address === 'string') return address;
  const { on, link, ending } = address;
  const first = on.startsWith('/notebooks/')
    ? await entryAddress(page, on.slice('/notebooks/'.length), link)
    : await linkOn(page, on, link);
  if (ending !== 'first trace') return first + (ending ?? '');
  await page.goto(first);
  await page.getByRole('region', { name: 'trace t1' }).click({ position: { x: 4, y: 4 } });
  const trace = page.locator('a[href^="/traces/"]').first();
  await expect(trace).toBeVisible();
  return (await trace.getAttribute('href')) ?? '';
}

async function linkOn(page: Page, on: string, name: string): Promise<string> {
  await page.goto(on);
  const link = page.getByRole('main').getByRole('link', { name, exact: true }).first();
  await expect(link).toBeVisible();
  return (await link.getAttribute('href')) ?? '';
}

/** Everything that a page fetches is there: plots are drawn, lists filled. */
async function settled(page: Page): Promise<void> {
  await expect(page.getByRole('main')).toBeVisible();
  await page.waitForLoadState('networkidle');
  await expect(page.locator('[aria-busy="true"]')).toHaveCount(0);
}

/** Serious and critical findings. A theme changes colours only, so the second theme is asked about colours only. */
async function findings(page: Page, coloursOnly = false): Promise<string[]> {
  const axe = new AxeBuilder({ page });
  const { violations } = await (
    coloursOnly
      ? axe.withRules(['color-contrast', 'link-in-text-block'])
      : axe.withTags(['wcag2a', 'wcag2aa', 'wcag21a', 'wcag21aa', 'wcag22aa'])
  ).analyze();
  return violations
    .filter(({ impact }) => impact === 'serious' || impact === 'critical')
    .map(({ id, nodes }) => `${id}: ${nodes.map(({ html }) => html.slice(0, 160)).join(' | ')}`);
}

async function visit(browser: Browser, under: PageUnderTest) {
  const { context, page } = await windowOf(browser, under.as, { colorScheme: 'light' });
  try {
    const address = await addressOf(page, under);
    const said = watch(page);
    const response = await page.goto(address);
    expect(response?.status(), `${address} is there`).toBeLessThan(400);
    await settled(page);

    expect.soft(await page.locator('h1').count(), 'one h1').toBe(1);
    expect.soft(await page.getByRole('main').count(), 'one main landmark').toBe(1);
    expect.soft(await page.title(), 'a title').not.toBe('');
    if (under.as !== null) {
      const skip = page.getByRole('link', { name: 'Skip to the content' });
      await expect.soft(skip).toHaveAttribute('href', '#content');
      expect.soft(await page.locator('#content').count(), 'where the skip link leads').toBe(1);
    }
    expect.soft(await findings(page), 'axe, light').toEqual([]);
    await page.emulateMedia({ colorScheme: 'dark' });
    expect.soft(await findings(page, true), 'axe, dark').toEqual([]);
    await page.setViewportSize({ width: 360, height: 740 });
    await expect
      .soft(async () =>
        expect(await page.evaluate(() => document.documentElement.scrollWidth)).toBeLessThanOrEqual(360),
      )
      .toPass({ timeout: 5_000 });
    expect.soft(said, 'console').toEqual([]);
  } finally {
    await context.close();
  }
}

for (const under of pagesUnderTest) {
  const of = typeof under.address === 'string' ? under.address : `${under.address.link}${under.address.ending ?? ''}`;
  test(`${under.pattern} (${of})`, async ({ browser }) => visit(browser, under));
}

test('a page that does not exist says so, in the same shape', async ({ browser }) => {
  const { context, page } = await windowOf(browser, 'tomas');
  const response = await page.goto('/notebooks/NB-99');
  expect(response?.status()).toBe(404);
  await expect(page.getByRole('heading', { level: 1 })).toHaveCount(1);
  expect(await findings(page)).toEqual([]);
  await context.close();
});
