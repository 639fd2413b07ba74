import { fileURLToPath } from 'node:url';
import type { Browser, Page } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import { getQuote } from '#contract/quotes';
import { instant } from '#domain/time/index';
import { steppedClock } from '#server/platform/clock';
import { makeSite, makeUser, type TestSite, unique } from '#tests/factories/house';
import { putBookInForce } from '#tests/factories/quotes';
import { expectSound, launchBrowser, type Person, signInWindow } from '#tests/support/browser';
import { type TestApp, testApp } from '#tests/support/test-app';

const CLIENT = fileURLToPath(new URL('../../../dist/client', import.meta.url));

let browser: Browser;
let app: TestApp;
let site: TestSite;
const windows: Person[] = [];

beforeAll(async () => {
  browser = await launchBrowser();
  // The day of the drawn quote: the browser asks the server for its day and never looks at its own.
  app = await testApp({ clock: steppedClock(instant('2026-03-12T09:42:00Z')), clientFolder: CLIENT });
  site = await makeSite(app.deps);
  await putBookInForce(app.deps, site.siteId);
});
afterAll(async () => {
  await browser.close();
  await app.stop();
});

async function signedIn(role: 'counsellor' | 'surgeon' | 'manager', width?: number): Promise<Page> {
  const { email } = await makeUser(app.deps, [role], [site.siteId]);
  const person = await signInWindow(browser, app.baseUrl, email, width);
  windows.push(person);
  return person.page;
}

async function takeUp(page: Page, familyName: string): Promise<void> {
  await page.getByRole('link', { name: 'Patients' }).click();
  await page.getByRole('heading', { name: 'Patients' }).waitFor();
  await expectSound(page);
  await page.getByRole('button', { name: 'New patient' }).click();
  const dialog = page.getByRole('dialog');
  await dialog.getByLabel('Given name').fill('Mara');
  await dialog.getByLabel('Family name').fill(familyName);
  await dialog.getByLabel('Born on').fill('1996-06-14');
  await dialog.getByLabel('E-mail').fill(`${familyName}@test.example`);
  await dialog.getByLabel('Prices').selectOption('hospital-staff');
  await dialog.getByRole('button', { name: 'Take up' }).click();
  await page.waitForURL(/\/patients\/\d+/);
}

/** Types an eye's refraction in the dialog; the other notation is echoed under it. */
async function typeEye(page: Page, eye: string, typed: readonly string[], echo: string): Promise<void> {
  const fields = page.getByRole('dialog').getByRole('group', { name: eye });
  for (const [index, label] of ['Sphere', 'Cylinder', 'Axis'].entries())
    await fields.getByLabel(label).fill(typed[index] ?? '');
  await fields.getByText(echo).waitFor();
}

describe('a counsellor at the quote sheet', () => {
  test('takes up a patient, prices both eyes while typing, and sends the quote', async () => {
    const familyName = unique('Quillfeather');
    const page = await signedIn('counsellor');
    await takeUp(page, familyName);

    // A fault is told at its field and nothing typed is lost; plus cylinders are welcome.
    await page.getByRole('button', { name: 'Record refraction' }).click();
    const right = page.getByRole('dialog').getByRole('group', { name: 'Right eye' });
    await right.getByLabel('Sphere').fill('-3.10');
    await page.getByRole('button', { name: 'Record', exact: true }).click();
    await right.getByText('not a step of 0.25 D').first().waitFor();
    await expectSound(page);
    await typeEye(page, 'Right eye', ['-3.50', '+1.50', '165'], 'also −2.00 −1.50 × 75');
    await typeEye(page, 'Left eye', ['-2.75', '-0.50', '110'], 'strongest meridian −3.25');
    await page.getByRole('button', { name: 'Record', exact: true }).click();
    await page.getByRole('dialog').waitFor({ state: 'detached' });
    await page.getByText('no approved plan').waitFor();
    const patient = new URL(page.url()).pathname;

    const surgeon = await signedIn('surgeon', 390);
    await surgeon.goto(patient);
    await surgeon.getByRole('button', { name: 'Approve plan' }).click();
    await surgeon.getByRole('group', { name: 'Right eye' }).getByLabel('Lenticule extraction').check();
    await surgeon.getByRole('group', { name: 'Left eye' }).getByLabel('Surface ablation').check();
    await surgeon.getByRole('button', { name: 'Approve this plan' }).click();
    await surgeon.getByText('plan approved').first().waitFor();
    await expectSound(surgeon);

    // The sheet begins with eyes, plan and price list; the table answers while typing.
    await page.reload();
    await page.getByRole('button', { name: 'New quote' }).click();
    await page.waitForURL(/\/quotes\/\d+/);
    for (const eye of ['Right eye', 'Left eye'])
      await page.getByRole('group', { name: eye }).getByLabel('Enhancement cover').selectOption('cover-24');
    await page.getByLabel('Day of surgery').fill('2026-04-09');
    await page.getByRole('button', { name: '4,560.00, why' }).waitFor();
    await page.getByText('saved 09:42').waitFor();
    await expectSound(page);

    // Any figure opens its reasons in the margin, and the address keeps it.
    await page.getByRole('button', { name: '150.00, why' }).click();
    const margin = page.getByRole('complementary', { name: 'Why this figure' });
    await margin.getByText('150.00 for the right eye').waitFor();
    await margin.getByText('−2.00 −1.50 × 75').waitFor();
    expect(page.url()).toContain('why=');

    // A second option beside it, with a discount over the limit: that one waits for a manager.
    await page.getByRole('button', { name: 'Add an option beside it' }).click();
    await page.getByLabel('Name of option B').fill('With goodwill');
    await page.getByLabel('Give a discount').selectOption('goodwill');
    await page.getByRole('textbox', { name: 'Goodwill of the clinic' }).fill('7');
    await page.getByText('needs another person’s approval').waitFor();
    await page.getByRole('button', { name: 'Send quote' }).click();
    await page.getByText('Goodwill of the clinic of 7 % is over your limit of 5 %.').waitFor();
    await page.getByRole('button', { name: 'Leave it' }).click();
    await page.getByRole('textbox', { name: 'Goodwill of the clinic' }).fill('5');
    await expectSound(page);

    await page.getByRole('button', { name: 'Send quote' }).click();
    const sending = page.getByRole('dialog');
    await sending.getByText('€4,560.00').waitFor();
    await sending.getByRole('button', { name: 'Send', exact: true }).click();
    await page.getByRole('heading', { name: 'Versions' }).waitFor();
    await expectSound(page);
    const quoteId = Number(/\/quotes\/(\d+)/.exec(page.url())?.[1]);
    const agent = await app.signIn((await makeUser(app.deps, ['auditor'], [site.siteId])).email);
    const quote = await agent.call(getQuote, { params: { quoteId } });
    expect([
      quote.state,
      quote.links.length,
      quote.versions[0]?.options.map((option) => option.label),
    ]).toEqual(['issued', 1, ['Both eyes on one day', 'With goodwill']]);
    expect(quote.versions[0]?.options[0]?.priced.totalMinor).toBe(456_000);

    // As the patient reads it, and in the list.
    await page.getByRole('link', { name: 'Preview as patient' }).click();
    await page.getByRole('heading', { name: 'Your quote, Mara' }).waitFor();
    await expectSound(page);
    await page.getByRole('link', { name: 'Quotes' }).click();
    await page.getByLabel('State').selectOption('issued');
    await page.getByRole('link', { name: `Mara ${familyName}` }).waitFor();
    expect(page.url()).toContain('state=issued');
    await expectSound(page);
  });

  test('beside another who writes on the same draft · is told and decides', async () => {
    const familyName = unique('Sallow');
    const mine = await signedIn('counsellor');
    await takeUp(mine, familyName);
    await mine.getByRole('button', { name: 'New quote' }).click();
    await mine.waitForURL(/\/quotes\/\d+/);
    const right = mine.getByRole('region', { name: 'Right eye' });
    await right.getByLabel('Sphere').waitFor();
    const theirs = await signedIn('manager');
    await theirs.goto(new URL(mine.url()).pathname);
    const theirRight = theirs.getByRole('region', { name: 'Right eye' });
    await theirRight.getByLabel('Sphere').fill('-4.00');
    await theirs.getByText(/draft 2 · saved/).waitFor();
    await right.getByLabel('Sphere').fill('-5.00');
    await mine.getByText('This draft was saved elsewhere meanwhile').waitFor();
    await expectSound(mine);
    expect(await right.getByLabel('Sphere').inputValue()).toBe('-5.00');
    await mine.getByRole('button', { name: 'Save mine over it' }).click();
    await mine.getByText(/draft 3 · saved/).waitFor();
    await theirRight.getByLabel('Cylinder').fill('-1.00');
    await theirs.getByRole('button', { name: 'Take the newer draft' }).click();
    await theirs.getByText(/draft 3 · saved/).waitFor();
    expect(await theirRight.getByLabel('Sphere').inputValue()).toBe('-5.00');
  });

  test('the price book · is read at any width', async () => {
    const page = await signedIn('manager');
    await page.goto('/price-book');
    await page.getByRole('heading', { name: 'Surcharges by prescription' }).waitFor();
    await page.getByText('Costs us, €').first().waitFor();
    for (const width of [1440, 390]) {
      await page.setViewportSize({ width, height: 900 });
      await expectSound(page);
    }
  });

  test('afterwards · no window has an error but the refusals that were meant', () => {
    const meant = /status of (409|422)/;
    expect(windows.flatMap((window) => window.errors.filter((error) => !meant.test(error)))).toEqual([]);
  });
});
