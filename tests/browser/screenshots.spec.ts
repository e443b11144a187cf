import { mkdirSync } from 'node:fs';
import { expect, test, type Page } from '@playwright/test';
import { entryAddress, windowOf, type DemoPerson } from './people';

/** Pictures of the pages that matter most, for people to look at; the test itself sees that each is whole. */

const folder = 'test-results/screenshots';
mkdirSync(folder, { recursive: true });

const day =
  (ending = '') =>
  async (page: Page) =>
    `${await entryAddress(page, 'NB-03', 'Escape over the exit barrier, day two')}${ending}`;
const draft =
  (ending = '') =>
  async (page: Page) =>
    `${await entryAddress(page, 'NB-03', 'Escape at −606 mV')}${ending}`;

const shots: { name: string; as: DemoPerson; where: (page: Page) => Promise<string>; plots: boolean }[] = [
  { name: 'today', as: 'ines', where: async () => '/', plots: false },
  { name: 'notebook', as: 'tomas', where: async () => '/notebooks/NB-03', plots: false },
  { name: 'entry-written', as: 'tomas', where: draft(), plots: true },
  { name: 'entry-read', as: 'priya', where: day(), plots: true },
  { name: 'sign', as: 'tomas', where: draft('/sign'), plots: false },
  {
    name: 'trace',
    as: 'priya',
    where: async (page) => {
      await page.goto(await day()(page));
      await page.locator('.trace-foot').first().click();
      return (await page.locator('a[href^="/traces/"]').first().getAttribute('href')) ?? '';
    },
    plots: true,
  },
];

for (const { name, as, where, plots } of shots) {
  test(`pictures of ${name}`, async ({ browser }) => {
    const { context, page } = await windowOf(browser, as, { viewport: { width: 1280, height: 900 } });
    const address = await where(page);
    for (const width of [1280, 360]) {
      for (const theme of ['light', 'dark'] as const) {
        await page.setViewportSize({ width, height: width === 360 ? 740 : 900 });
        await page.emulateMedia({ colorScheme: theme });
        await page.goto(address);
        await page.waitForLoadState('networkidle');
        if (plots) await expect(page.locator('.u-over').first()).toBeVisible();
        await expect(page.locator('[aria-busy="true"]')).toHaveCount(0);
        await page.screenshot({ path: `${folder}/${name}-${width}-${theme}.png`, fullPage: true });
        // Nothing that can be pressed lies under something else at the place where it shows.
        expect(await covered(page), `${name} at ${width} px`).toEqual([]);
      }
    }
    await context.close();
  });
}

/** Buttons and links in the first screen whose middle belongs to another element. */
function covered(page: Page): Promise<string[]> {
  return page.evaluate(() => {
    window.scrollTo(0, 0);
    return [...document.querySelectorAll<HTMLElement>('main a, main button, main summary, main input, main select')]
      .filter((element) => {
        const box = element.getBoundingClientRect();
        if (box.width < 2 || box.height < 2 || !element.checkVisibility({ visibilityProperty: true })) return false;
        const [x, y] = [box.x + box.width / 2, box.y + box.height / 2];
        if (x < 0 || y < 0 || x >= innerWidth || y >= innerHeight) return false;
        const scroller = element.closest<HTMLElement>('.toolbar, [role="region"], nav, .provenance');
        const frame = scroller?.getBoundingClientRect();
        if (frame && (x > frame.right || x < frame.left || y > frame.bottom)) return false;
        const top = document.elementFromPoint(x, y);
        // The provenance column lies over the end of the sheet on small screens, by design; the page scrolls past it.
        if (top?.closest('.provenance') && !element.closest('.provenance')) return false;
        return !(top && (element.contains(top) || top.contains(element) || top.closest('label')?.contains(element)));
      })
      .map((element) => element.outerHTML.slice(0, 120));
  });
}
