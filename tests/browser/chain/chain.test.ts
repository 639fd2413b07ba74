import { fileURLToPath } from 'node:url';
import type { Browser } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import { pullPayouts } from '#server/features/bank/index';
import { computeProof } from '#server/features/proof/index';
import { systemClock } from '#server/platform/clock';
import { rawRows, readMinor } from '#server/platform/db';
import { type Mailbox, startMailbox } from '#stand-ins/mailbox/start-mailbox';
import { type ChainHouse, courseOfQuote, makeChainHouse } from '#tests/factories/chain';
import { expectSound, launchBrowser, openWindow, type Person, signInWindow } from '#tests/support/browser';
import { type TestApp, testApp } from '#tests/support/test-app';
import { freshDatabase } from '#tests/support/test-database';
import { type TestStripe, testStripe } from '#tests/support/test-stripe';
import { sendQuoteOnScreen } from './send-quote.ts';

const CLIENT = fileURLToPath(new URL('../../../dist/client', import.meta.url));

let browser: Browser;
let stripe: TestStripe;
let mailbox: Mailbox;
let app: TestApp;
let house: ChainHouse;
const windows: Person[] = [];

beforeAll(async () => {
  browser = await launchBrowser();
  stripe = await testStripe();
  mailbox = await startMailbox();
  app = await testApp({
    database: await freshDatabase('chain'),
    stripeUrl: stripe.apiUrl,
    smtpUrl: mailbox.smtpUrl,
    clientFolder: CLIENT,
  });
  await stripe.control.setWebhook({
    url: `${app.baseUrl}/webhooks/stripe`,
    secret: 'whsec_tenderlight_local',
  });
  house = await makeChainHouse(app);
});
afterAll(async () => {
  await browser.close();
  await app.stop();
  await mailbox.stop();
  await stripe.stop();
});

async function signedIn(name: keyof ChainHouse['people'], width?: number): Promise<Person> {
  const person = await signInWindow(browser, app.baseUrl, house.people[name].email, width);
  windows.push(person);
  return person;
}

describe('the chain in the browser', () => {
  test('counsellor, surgeon, patient, desk and second person · walk it in one go', async () => {
    const surgeon = await signedIn('surgeon', 390);
    const quote = await sendQuoteOnScreen(await signedIn('counsellor'), surgeon, house.today);
    await app.settle();
    const desk = await signedIn('desk');
    await expectSound(desk.page);

    // The patient opens the mailed link on a phone.
    const sent = (await mailbox.mails()).find((mail) => mail.to === quote.email);
    expect(sent?.attachments.map((file) => file.contentType)).toEqual(['application/pdf']);
    const link = /https?:\/\/\S+\/q\/\S+/.exec(sent?.text ?? '')?.[0] ?? '';
    const patient = await openWindow(browser, app.baseUrl, 390, 844);
    windows.push(patient);
    await patient.page.goto(link);
    await patient.page.getByRole('heading', { name: 'Your quote, Wilma' }).waitFor();
    expect(patient.page.url()).toBe(`${app.baseUrl}/my-quote`);
    await expectSound(patient.page);
    for (const tick of await patient.page.getByRole('checkbox').all()) await tick.check();
    await patient.page.getByLabel('Your full name, typed').fill('Wilma Tester');
    await patient.page.getByRole('button', { name: /Accept and pay/ }).click();

    // The hosted page of the processor.
    await patient.page.waitForURL((url) => url.origin !== app.baseUrl);
    await payOnHostedPage(patient);
    await patient.page.waitForURL((url) => url.origin === app.baseUrl);
    await patient.page.getByText(/received\. The receipt is on its way/).waitFor();
    await expectSound(patient.page);
    await stripe.control.idle();
    await app.settle();
    const receiptMail = (await mailbox.mails()).find((mail) => mail.subject.startsWith('Receipt'));
    expect(receiptMail?.attachments[0]?.contentType).toBe('application/pdf');

    // The desk sees it without reloading.
    await desk.page.getByRole('heading', { name: 'Paid online since this morning' }).waitFor();
    await desk.page
      .getByRole('table', { name: 'Paid online since this morning' })
      .getByText(/Wilma/)
      .waitFor();
    await desk.page.getByRole('link', { name: 'Takings' }).click();
    await desk.page.getByRole('button', { name: 'Open Till 1' }).waitFor();
    await desk.page.getByLabel(/Float counted/).fill('200');
    await desk.page.getByRole('button', { name: 'Open Till 1' }).click();
    await desk.page.getByRole('button', { name: 'Count the till' }).waitFor();
    await expectSound(desk.page);

    // The balance, half by card and half in cash with change.
    const courseId = await courseOfQuote(app, quote.quoteId);
    await desk.page.goto(`/courses/${courseId}/pay`);
    const amount = desk.page.getByLabel(/^Amount/);
    await amount.waitFor();
    const due = Number((await amount.inputValue()).replace(/\D/g, ''));
    await amount.fill(((due - 30_000) / 100).toFixed(2));
    await desk.page.getByLabel('Slip number').fill('4711');
    await desk.page.getByRole('button', { name: 'Add another tender' }).click();
    await desk.page.getByLabel(/Handed over/).fill('350');
    await desk.page.getByText('Change to give').waitFor();
    await expectSound(desk.page);
    await desk.page.getByRole('button', { name: /^Take €/ }).click();
    await desk.page.getByRole('heading', { name: /^Receipt / }).waitFor();
    await expectSound(desk.page);

    // The surgeon records both eyes and sees the fee on a phone.
    await surgeon.page.goto(`/courses/${courseId}`);
    for (const side of ['right', 'left']) {
      const record = surgeon.page.getByRole('button', { name: `Record the ${side} eye as done` });
      await record.click();
      await surgeon.page.getByRole('button', { name: 'Record it as done' }).click();
      await record.waitFor({ state: 'detached' });
    }
    await expectSound(surgeon.page);
    // Receipts are told to the surgeon, and lead nowhere they may not go.
    const receiptTable = surgeon.page.getByRole('table', { name: 'Receipts' });
    expect(await receiptTable.getByRole('row').count()).toBe(3);
    expect(await receiptTable.getByRole('link').count()).toBe(0);
    await desk.page.goto(`/courses/${courseId}`);
    await desk.page.getByRole('heading', { level: 1 }).waitFor();
    await expectSound(desk.page);
    await surgeon.page.goto('/fees');
    await surgeon.page.getByRole('button', { name: '€800.00, why' }).click();
    await surgeon.page.getByText('Why this figure').waitFor();
    await expectSound(surgeon.page);

    // Till and day, by two people.
    await desk.page.goto('/takings');
    await desk.page.getByRole('button', { name: 'Count the till' }).click();
    await desk.page.getByLabel('note of 100.00').fill('5');
    await desk.page.getByRole('button', { name: 'Keep this count' }).click();
    await desk.page.getByText('Waits for a second person to close it.').waitFor();
    const desk2 = await signedIn('desk2');
    await desk2.page.goto('/takings');
    await desk2.page.getByRole('button', { name: 'Close as the second person' }).click();
    await desk2.page.getByText('Closed by').waitFor();
    await desk.page.goto('/takings/close');
    await desk.page.getByLabel('Batch number').fill('0318');
    await desk.page.getByLabel(/^Total/).fill(((due - 30_000) / 100).toFixed(2));
    await desk.page.getByLabel('Slips').fill('1');
    await desk.page.getByRole('button', { name: 'Enter the batch' }).click();
    await desk.page.getByRole('button', { name: 'The day is complete' }).click();
    await desk.page.getByText(/another person closes it/).waitFor();
    await expectSound(desk.page);
    await desk2.page.goto('/takings/close');
    await desk2.page.getByRole('button', { name: 'Close the day' }).click();
    await desk2.page.getByRole('link', { name: 'Report as PDF' }).waitFor();
    await expectSound(desk2.page);

    // The payout, and everything ties.
    await stripe.control.advanceClock(4 * 24 * 3_600_000);
    expect(await pullPayouts(app.deps)).toBe(1);
    await app.settle();
    const auditor = await signedIn('auditor');
    await auditor.page.goto('/proof');
    await auditor.page.getByText(/controls, all tie/).waitFor();
    await expectSound(auditor.page);
    const proof = await computeProof({ db: app.deps.db, clock: systemClock }, undefined);
    expect(proof.controls.filter((control) => !control.tied)).toEqual([]);
    const [clearing] = await rawRows<{ total: unknown }>(
      app.deps.db,
      "SELECT SUM(amount_minor) AS total FROM journal_lines WHERE account_code = '1100'",
    );
    expect(readMinor(clearing?.total)).toBe(await app.deps.gateways.stripe.balance(proof.currency));
    const [trial] = await rawRows<{ total: unknown }>(
      app.deps.db,
      'SELECT SUM(amount_minor) AS total FROM journal_lines',
    );
    expect(readMinor(trial?.total)).toBe(0);
    // Two receipts, numbered without a gap, each with its own mail and PDF.
    const receipts = await rawRows<{ number: string }>(
      app.deps.db,
      'SELECT number FROM receipts ORDER BY number',
    );
    expect(receipts.map((row) => Number(row.number.split('-').at(-1)))).toEqual([1, 2]);
    const told = (await mailbox.mails()).filter((mail) => mail.subject.startsWith('Receipt'));
    expect(told.map((mail) => mail.attachments.map((file) => file.contentType))).toEqual(
      receipts.map(() => ['application/pdf']),
    );
    expect(windows.flatMap((person) => person.errors)).toEqual([]);
  });

  test.each([
    [1440, 'light'],
    [768, 'light'],
    [390, 'light'],
    [1440, 'dark'],
    [390, 'dark'],
  ] as const)(
    'every page of the manager · %i wide, %s · overflows nowhere and satisfies axe',
    async (width, scheme) => {
      const manager = await signInWindow(browser, app.baseUrl, house.people.manager.email, width);
      await manager.page.emulateMedia({ colorScheme: scheme });
      for (const path of [
        '/',
        '/patients',
        '/quotes',
        '/takings',
        '/takings/close',
        '/bank',
        '/fees',
        '/price-book',
        '/proof',
        '/proof/journal',
        '/proof/trial-balance',
        '/settings',
        '/nowhere',
      ]) {
        await manager.page.goto(path);
        await manager.page.getByRole('heading', { level: 1 }).waitFor();
        await manager.page
          .getByRole('status', { name: /Fetching|Proving|Adding/ })
          .first()
          .waitFor({ state: 'detached' });
        await expectSound(manager.page);
      }
      expect(manager.errors).toEqual([]);
      await manager.context.close();
    },
  );
});

async function payOnHostedPage({ page }: Person): Promise<void> {
  await page.getByLabel(/card number/i).fill('4242424242424242');
  await page.getByLabel(/expiry/i).fill('12/40');
  await page.getByLabel(/code/i).fill('123');
  const email = page.getByLabel(/e-?mail/i);
  if ((await email.count()) > 0 && (await email.isEditable())) await email.fill('payer@patients.example');
  await page.getByLabel(/name/i).first().fill('Wilma Tester');
  await page.getByRole('button', { name: /pay/i }).click();
}
