import { createHash } from 'node:crypto';
import { readFileSync } from 'node:fs';
import { expect, test, type BrowserContext, type Page } from '@playwright/test';
import { elementaryCharge, onOffRun } from './on-off-run';
import { demoPassword, mailOf, mailTo, signIn, watch, windowOf } from './people';
import {
  attach,
  below,
  readResult,
  saved,
  saveWords,
  text,
  textFile,
  traceOf,
  value,
  writeBelow,
  writeValue,
} from './sheet';

test.describe.configure({ mode: 'serial' });

const run = Date.now().toString(36);
const author = { name: 'Runa Vestby', email: `runa.${run}@fjordheim.example`, password: 'barrier over a cold well' };
const outsider = { name: 'Sten Hagen', email: `sten.${run}@fjordheim.example`, password: 'another book entirely' };
const title = `Escape over the exit barrier, run ${run}`;
const frequency = 200e3;
const onOff = onOffRun(frequency, 0.92, 0.21);
const messy = ['fortran_d.dat', 'log_quoted.csv', 'map_long_03.tsv', 'sweep_2031-02-10_a.csv'];

type Expected = { file: string; n_rows?: number; shape?: [number, number]; columns?: Record<string, unknown[]> };
const expected = (JSON.parse(readFileSync('tests/reference/messy/expected.json', 'utf8')) as { files: Expected[] })
  .files;

/** Rows of a file as pandas found them, with the thin spaces in which the page groups digits. */
function rowsIn(name: string): string {
  const { n_rows, shape, columns } = expected.find(({ file }) => file === name)!;
  const rows = n_rows ?? (shape ? shape[0] * shape[1] : Object.values(columns ?? {})[0]!.length);
  return rows.toLocaleString('en').replaceAll(',', '\u2009');
}

/** What later steps need of earlier ones. */
let address = '';
let traceAddress = '';
let leaf = 0;
let shownEscape = '';
const windows: BrowserContext[] = [];
let page: Page;
let errors: string[] = [];

test.beforeAll(async ({ browser }) => {
  const context = await browser.newContext({ viewport: { width: 1280, height: 900 } });
  windows.push(context);
  page = await context.newPage();
  // A network that drops, a conflict and a wrong password are part of this job; the browser writes each to its console.
  errors = watch(page, /ERR_INTERNET_DISCONNECTED|ERR_FAILED|status of (409|422)/);
});

test.afterAll(async () => {
  for (const context of windows) await context.close();
});

test('the administrator invites two people by mail, and both join', async ({ browser }) => {
  const ada = await windowOf(browser, 'ada');
  for (const person of [author, outsider]) {
    await ada.page.goto('/administration');
    await ada.page.getByLabel('E-mail address').fill(person.email);
    await ada.page.getByLabel('Full name').fill(person.name);
    await ada.page.getByRole('button', { name: 'Send the invitation' }).click();
    await expect(ada.page.getByText('The invitation is on its way')).toBeVisible();
    const mail = await mailTo(ada.page, person.email, /./);
    const link = /https?:\/\/\S+\/join\?token=\S+/.exec(mail)?.[0];
    expect(link, 'the mail holds the link').toBeTruthy();

    const context = await browser.newContext();
    const joining = await context.newPage();
    await joining.goto(link!);
    await expect(joining.getByText(person.email)).toBeVisible();
    await joining.getByLabel('Password').fill(person.password);
    await joining.getByRole('button', { name: 'Join' }).click();
    await expect(joining.getByRole('heading', { level: 1, name: 'Today' })).toBeVisible();
    await joining.goto(link!);
    await expect(joining.getByText(/used|expired|no longer/)).toBeVisible();
    await context.close();
  }
  await ada.page.goto('/notebooks/NB-03');
  await expect(
    ada.page.getByRole('heading', { name: /not|nothing/i }),
    'an administrator reads no notebook',
  ).toBeVisible();
  await ada.context.close();
});

test('the lead makes the new person an author of the notebook', async ({ browser }) => {
  const ines = await windowOf(browser, 'ines');
  await ines.page.goto('/notebooks/NB-03/members');
  await ines.page.getByLabel('E-mail address of somebody with an account').fill(author.email);
  await ines.page.getByRole('combobox', { name: 'Role', exact: true }).selectOption('author');
  await ines.page.getByRole('button', { name: 'Add', exact: true }).click();
  await expect(ines.page.getByRole('cell', { name: author.name, exact: true }).first()).toBeVisible();
  expect(await mailTo(ines.page, author.email, /You are now author/)).toContain('NB-03');
  await ines.context.close();
});

test('the author begins a cooldown day and keeps the log', async () => {
  await signIn(page, author.email, author.password);
  await page.getByRole('link', { name: 'New entry' }).click();
  await expect(page.getByLabel('Cooldown')).toBeVisible();
  await page.getByLabel('GA1-B3').check();
  await page.getByLabel('Title').fill(title);
  await page.getByRole('button', { name: 'Take the next leaf' }).click();
  await expect(text(page)).toBeVisible();
  address = new URL(page.url()).pathname;
  leaf = Number(await page.locator('.leaf strong').textContent());

  await page.getByRole('button', { name: 'I have read this' }).click();
  await expect(page.getByText(`Read and acknowledged`)).toContainText(author.name);
  await writeBelow(page, 'Aim', 'Escape probability at one exit-gate voltage.');
  await below(page, 'Log').click();
  await page.keyboard.press('Control+;');
  await page.keyboard.type('Drive on, exit gate at −620 mV.');
  const line = page.locator('.log-line');
  await expect(line).toContainText('Drive on, exit gate at −620 mV.');
  await expect(line.locator('time')).toHaveText(/^\d\d:\d\d:\d\d$/);
  await saved(page);
});

test('traces come in with their units; a missing one is asked for and stated', async () => {
  await below(page, 'Measurements').click();
  await attach(page, [textFile('on-off.csv', onOff.file)]);
  const first = page.getByRole('region', { name: 'trace t1' });
  await expect(first).toContainText('on-off.csv');
  await expect(first).toContainText('2 columns');
  await expect(first.locator('canvas')).toBeVisible();

  await attach(
    page,
    messy.map((name) => `tests/reference/messy/${name}`),
  );
  for (const name of messy) {
    await expect(traceOf(page, name).locator('.trace-foot')).toContainText(`${rowsIn(name)} rows`);
  }

  await attach(page, [textFile('no-unit.csv', 'x (mV),y\n1,2\n2,4\n3,6\n')]);
  const asked = traceOf(page, 'no-unit.csv');
  await expect(asked.getByText(/1 thing to state/)).toBeVisible();
  const unit = asked.getByLabel('Unit', { exact: true }).nth(1);
  await expect(unit).toHaveAttribute('aria-invalid', 'true');
  await expect(unit).toHaveAccessibleDescription('unit not stated');
  await unit.fill('pA');
  await expect(unit).not.toHaveAttribute('aria-invalid', 'true');
  await expect(asked.getByText(/to state/)).toHaveCount(0);
  await expect(page.getByRole('list', { name: 'Files on their way' })).toHaveCount(0);
  await saved(page);
});

test('spans by typed numbers and by dragging, values with the right result and their budget', async () => {
  const trace = page.getByRole('region', { name: 'trace t1' });
  await trace.getByLabel('Span', { exact: true }).fill('on');
  await trace.getByLabel(/^from/).fill('16');
  await trace.getByLabel(/^to/).fill('44');
  await trace.getByRole('button', { name: 'Name this span' }).click();
  await expect(trace.getByRole('listitem').filter({ hasText: '16 to 44' })).toContainText('on');

  await trace.getByText('Plot tools').click();
  await trace.getByLabel('drag marks a span').check();
  const area = trace.locator('.u-over');
  await area.scrollIntoViewIfNeeded();
  const box = (await area.boundingBox())!;
  const at = (seconds: number) => box.x + (box.width * seconds) / 120;
  await page.mouse.move(at(50), box.y + box.height / 2);
  await page.mouse.down();
  await page.mouse.move(at(60), box.y + box.height / 2, { steps: 4 });
  await page.mouse.move(at(70), box.y + box.height / 2, { steps: 4 });
  await page.mouse.up();
  const low = Number(await trace.getByLabel(/^from/).inputValue());
  const high = Number(await trace.getByLabel(/^to/).inputValue());
  expect(low).toBeGreaterThan(47);
  expect(high).toBeLessThan(74);
  expect(high - low).toBeGreaterThan(15);
  await expect(trace.getByLabel('Span', { exact: true })).toBeFocused();
  await trace.getByLabel('Span', { exact: true }).fill('off');
  await page.keyboard.press('Enter');
  await expect(trace.getByRole('listitem').filter({ hasText: 'off' })).toBeVisible();

  await below(page, 'Results').click();
  await writeValue(page, 'f = 200 kHz exactly');
  await writeValue(page, 'I_on = mean(t1.I, on)');
  await writeValue(page, 'I_off = mean(t1.I, off)');
  await writeValue(page, 'P_esc = (I_on - I_off)/(e*f)');

  // By hand from the samples that this test made: means over the spans, e from the SI.
  const escape = ((onOff.mean([[16, 44]]) - onOff.mean([[low, high]])) * 1e-15) / (elementaryCharge * frequency);
  await expect(value(page, 'P_esc')).toHaveAttribute('aria-label', /\d\(\d+\)/);
  shownEscape = (await value(page, 'P_esc').getAttribute('aria-label'))!.replace(/^value /, '');
  const shown = readResult(shownEscape);
  expect(Math.abs(shown.value - escape)).toBeLessThanOrEqual(shown.step * 0.5000001);
  // Scatter of four uniform numbers: variance 1/3 fA². White noise gives u = s·√(1/n₁ + 1/n₂); a correlation that was seen may add.
  const count = ([from, to]: [number, number]) => (to - from) * 20;
  const white =
    (Math.sqrt((1 / 3) * (1 / count([16, 44]) + 1 / count([low, high]))) * 1e-15) / (elementaryCharge * frequency);
  expect(shown.u).toBeGreaterThan(0.8 * white);
  expect(shown.u).toBeLessThan(2.5 * white);

  await value(page, 'P_esc').click();
  const provenance = page.getByRole('complementary', { name: 'Provenance' });
  await expect(provenance.getByRole('heading', { name: 'Where this value comes from' })).toBeVisible();
  await expect(provenance).toContainText('(I_on - I_off)/(e*f)');
  const budget = provenance.getByRole('table');
  for (const [input, type] of [
    ['I_on', 'A'],
    ['I_off', 'A'],
    ['f', 'exact'],
    ['e, elementary charge', 'exact'],
  ] as const) {
    await expect(
      budget.getByRole('row').filter({ has: page.getByRole('rowheader', { name: input, exact: true }) }),
    ).toContainText(type);
  }
  await expect(provenance).toContainText('I_on: t1.I over on: 561 samples');
  await saved(page);
});

test('what is typed while the network is away is kept, said to be kept, and sent when it is back', async () => {
  const context = page.context();
  await context.setOffline(true);
  await writeBelow(page, 'What next', 'Written without a network.');
  await expect(saveWords(page)).toContainText('kept in this browser, not yet on the server');
  await context.setOffline(false);
  await saved(page);
});

test('a second window saves first: both texts are compared and both survive', async () => {
  const context = page.context();
  const second = await context.newPage();
  await second.goto(address);
  await expect(text(second)).toContainText('Written without a network.');

  // The first window cannot reach the server for a while; the second can.
  await page.route('**/api/entries/*/draft', (route) => route.abort());
  await below(page, 'Aim').click();
  await page.keyboard.press('End');
  await page.keyboard.type(' From the first window.');
  await expect(saveWords(page)).toContainText('not yet on the server');

  await below(second, 'Aim').click();
  await second.keyboard.press('End');
  await second.keyboard.type(' From the second window.');
  await saved(second);
  await second.close();

  await page.unroute('**/api/entries/*/draft');
  await page.bringToFront();
  await expect(async () => {
    const again = page.getByRole('button', { name: 'Try now' });
    if (await again.isVisible()) await again.click();
    await expect(saveWords(page)).toHaveText('another window changed this entry: compare', { timeout: 1_000 });
  }).toPass();
  await page.getByRole('button', { name: 'Compare' }).click();
  const compare = page.getByRole('region', { name: 'Another window changed this entry' });
  await expect(compare).toContainText('From the first window.');
  await expect(compare).toContainText('From the second window.');
  await compare.getByRole('button', { name: 'Both everywhere' }).click();
  await compare.getByRole('button', { name: 'Keep this and go on writing' }).click();
  await expect(text(page)).toContainText('From the first window.');
  await expect(text(page)).toContainText('From the second window.');
  await saved(page);
  await page.reload();
  await expect(text(page)).toContainText('From the first window.');
  await expect(text(page)).toContainText('From the second window.');
});

test('signing shows what is bound, asks for the password again, and ends the writing', async () => {
  await page.getByRole('complementary', { name: 'Provenance' }).getByRole('button', { name: 'Sign' }).click();
  await expect(page.getByRole('heading', { level: 1, name: `Sign leaf ${leaf}` })).toBeVisible();
  const main = page.getByRole('main');
  await expect(main.getByText(/^[0-9a-f]{64}$/)).toBeVisible();
  await expect(page.getByRole('region', { name: 'Values bound' })).toContainText(shownEscape.split(' = ')[1]!);
  await expect(main).toContainText(createHash('sha256').update(onOff.file).digest('hex'));
  for (const name of messy) {
    await expect(main).toContainText(
      createHash('sha256')
        .update(readFileSync(`tests/reference/messy/${name}`))
        .digest('hex'),
    );
  }
  await page.getByLabel('Priya Menon').check();
  await page.getByLabel('Your password, again').fill('not my password');
  const press = page.getByRole('button', { name: /^Sign version/ });
  await press.click();
  await expect(page.getByText(/password is not right/i)).toBeVisible();
  await page.getByLabel('Your password, again').fill(author.password);
  await press.click();
  await expect(page.getByRole('region', { name: 'Signatures' })).toContainText(author.name);
  await expect(page.getByText('signed, waits for countersignature')).toBeVisible();
  await expect(text(page)).toHaveCount(0);
  await expect(page.getByRole('toolbar', { name: 'Writing' })).toHaveCount(0);
  const refused = await page.request.put(`/api${address}/draft`, {
    data: {
      basedOn: 1,
      title: 'changed after signing',
      doc: { type: 'doc', content: [] },
      written: {},
      clockOffsetMs: 0,
    },
  });
  expect(refused.status()).toBeGreaterThanOrEqual(400);
  await page.reload();
  await expect(page.getByRole('heading', { level: 1, name: title })).toBeVisible();
  expect(errors).toEqual([]);
});

test('the witness reads, asks, waits for the answer, and countersigns what was read', async ({ browser }) => {
  const priya = await windowOf(browser, 'priya', { viewport: { width: 1280, height: 900 } });
  windows.push(priya.context);
  const witness = priya.page;
  const said = watch(witness);
  expect(await mailTo(witness, mailOf('priya'), new RegExp(`Please countersign NB-03 leaf ${leaf}`))).toContain(
    address,
  );
  await witness.goto('/countersign');
  await witness.getByRole('link', { name: title }).click();
  await expect(witness.getByRole('button', { name: `value ${shownEscape}` })).toBeVisible();
  await expect(witness.getByRole('region', { name: /^trace / })).toHaveCount(6);

  await witness.getByText('Drive on, exit gate at −620 mV.').click();
  await witness.getByRole('button', { name: 'Ask', exact: true }).click();
  await expect(witness.getByLabel('about')).toHaveValue(/.+/);
  await witness.getByLabel('Your question').fill('Was the offset taken before the ramp?');
  await witness.getByRole('button', { name: 'Ask', exact: true }).click();
  await expect(witness.getByRole('article', { name: 'Question by Priya Menon' })).toContainText('open');
  expect(await mailTo(witness, author.email, new RegExp(`Question on NB-03 leaf ${leaf}`))).toContain('offset');

  await witness.goto(`${address}/countersign`);
  await expect(witness.getByText('One question is open: countersigning waits for its answer.')).toBeVisible();
  await expect(witness.getByRole('button', { name: /^Countersign version/ })).toHaveCount(0);

  await page.goto('/');
  await page.getByRole('link', { name: title }).first().click();
  const question = page.getByRole('article', { name: 'Question by Priya Menon' });
  await question.getByRole('button', { name: 'Answer' }).click();
  await question.getByLabel('Answer to Priya Menon').fill('Before it, with the drive off.');
  await question.locator('form').getByRole('button', { name: 'Answer' }).click();
  await expect(question).toContainText('Before it, with the drive off.');
  await expect(question).toContainText('answered');
  expect(await mailTo(witness, mailOf('priya'), new RegExp(`Answer on NB-03 leaf ${leaf}`))).toContain('Before it');

  await witness.goto(address);
  await expect(witness.getByText('6 of 6 traces seen.')).toBeVisible();
  await witness.getByRole('link', { name: 'Countersign', exact: true }).last().click();
  await expect(witness.getByText(/I took no part in the work/)).toBeVisible();
  await witness.getByLabel('Your password, again').fill(demoPassword);
  await witness.getByRole('button', { name: /^Countersign version/ }).click();
  await expect(witness.getByText('signed and countersigned')).toBeVisible();
  await expect(witness.getByRole('region', { name: 'Signatures' })).toContainText('Priya Menon');
  for (const to of [author.email, mailOf('priya'), mailOf('ines')]) {
    expect(await mailTo(witness, to, new RegExp(`NB-03 leaf ${leaf} is countersigned`))).toContain('Priya Menon');
  }
  expect(said).toEqual([]);
});

test('a reader reads; somebody outside the notebook finds nothing', async ({ browser }) => {
  const oskar = await windowOf(browser, 'oskar');
  await oskar.page.goto(address);
  await expect(oskar.page.getByRole('button', { name: `value ${shownEscape}` })).toBeVisible();
  await expect(oskar.page.getByRole('region', { name: 'Signatures' })).toContainText(author.name);
  await oskar.page.getByRole('region', { name: 'trace t1' }).click({ position: { x: 4, y: 4 } });
  traceAddress = (await oskar.page.locator('a[href^="/traces/"]').first().getAttribute('href')) ?? '';
  await oskar.page.goto(traceAddress);
  await expect(oskar.page.locator('canvas')).toBeVisible();
  await oskar.context.close();

  const other = await windowOf(browser, outsider);
  const path = new URL(traceAddress, 'http://localhost').pathname;
  for (const where of [address, `${address}/versions`, `${address}/sign`, path, '/notebooks/NB-03']) {
    const response = await other.page.goto(where);
    expect(response?.status(), where).toBe(404);
    await expect(other.page.getByText(title)).toHaveCount(0);
  }
  for (const where of [
    `/api${address}`,
    `/api${address}/draft`,
    `/api${path}`,
    `/api${path}/file`,
    `/api${path}/rows`,
  ]) {
    const response = await other.page.request.get(where);
    expect(response.status(), where).toBe(404);
  }
  await other.context.close();
});
