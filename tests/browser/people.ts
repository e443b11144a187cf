import { expect, type Browser, type BrowserContext, type BrowserContextOptions, type Page } from '@playwright/test';

export type DemoPerson = 'ines' | 'tomas' | 'priya' | 'oskar' | 'ada';
export const demoPassword = 'cold-finger-demo';
export const mailOf = (who: DemoPerson) => `${who}@fjordheim.example`;

type State = Awaited<ReturnType<BrowserContext['storageState']>>;
const sessions = new Map<string, Promise<State>>();

/** Signs in through the form, as a person does, and waits for Today. */
export async function signIn(page: Page, email: string, password: string): Promise<void> {
  await page.goto('/sign-in');
  await page.getByLabel('E-mail address').fill(email);
  await page.getByLabel('Password', { exact: true }).fill(password);
  await page.getByRole('button', { name: 'Sign in' }).click();
  await expect(page.getByRole('heading', { level: 1, name: 'Today' })).toBeVisible();
}

/** A window of one person. Each account signs in once for the whole run: trying often is refused, and rightly. */
export async function windowOf(
  browser: Browser,
  who: DemoPerson | { email: string; password: string } | null,
  options: BrowserContextOptions = {},
): Promise<{ context: BrowserContext; page: Page }> {
  let storageState: State | undefined;
  if (who) {
    const { email, password } = typeof who === 'string' ? { email: mailOf(who), password: demoPassword } : who;
    if (!sessions.has(email)) {
      sessions.set(
        email,
        (async () => {
          const context = await browser.newContext();
          await signIn(await context.newPage(), email, password);
          const state = await context.storageState();
          await context.close();
          return state;
        })(),
      );
    }
    storageState = await sessions.get(email);
  }
  const context = await browser.newContext({ ...(storageState ? { storageState } : {}), ...options });
  return { context, page: await context.newPage() };
}

/** What a page must never say to its console: errors, refused policies, uncaught exceptions. `expected` takes out what a test causes itself. */
export function watch(page: Page, expected: RegExp | null = null): string[] {
  const said: string[] = [];
  const note = (line: string) => {
    if (!expected?.test(line)) said.push(line);
  };
  page.on('console', (message) => {
    if (message.type() === 'error') note(`${message.text()} ${message.location().url}`);
  });
  page.on('pageerror', (error) => note(String(error)));
  return said;
}

/** Address of an entry, by its notebook and title. */
export async function entryAddress(page: Page, notebook: string, title: string): Promise<string> {
  await page.goto(`/notebooks/${notebook}`);
  const link = page.getByRole('link', { name: title, exact: true }).first();
  await expect(link).toBeVisible();
  return (await link.getAttribute('href')) ?? '';
}

/** Body of the newest mail to an address with that subject, out of the local mailbox page. */
export async function mailTo(page: Page, address: string, subject: RegExp): Promise<string> {
  const line = page.locator('li', { has: page.locator('summary', { hasText: address }) }).filter({ hasText: subject });
  await expect(async () => {
    await page.goto(page.url().includes('/sign-in') ? '/sign-in' : '/mailbox');
    await expect(line.first()).toBeVisible({ timeout: 1_000 });
  }).toPass();
  return (await line.first().locator('p').textContent()) ?? '';
}
