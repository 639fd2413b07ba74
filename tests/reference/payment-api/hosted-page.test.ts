import { AxeBuilder } from '@axe-core/playwright';
import { type Browser, chromium } from 'playwright-core';
import { afterEach, beforeEach, describe, expect, test } from 'vitest';
import type { SessionOptions, TestBed } from './test-bed.ts';
import { openSession, openTestBed } from './test-bed.ts';

let bed: TestBed;
beforeEach(async () => {
  bed = await openTestBed();
});
afterEach(() => bed.close());

const FORM = {
  email: 'ana@example.test',
  number: '4242 4242 4242 4242',
  expiry: '04 / 31',
  code: '123',
  name: 'Ana',
};

async function pageOf(options: SessionOptions = {}) {
  const session = await openSession(bed, options);
  const url = session.url ?? '';
  const send = (form: Partial<typeof FORM>, path = '') =>
    fetch(`${url}${path}`, {
      method: 'POST',
      body: new URLSearchParams({ ...FORM, ...form }),
      redirect: 'manual',
    });
  return { session, url, send };
}

describe('The hosted page', () => {
  test('says what it is · banner, items, total, way back, labelled fields; no script and no name', async () => {
    const { url, session } = await pageOf({
      line_items: [
        {
          quantity: 2,
          price_data: { currency: 'eur', unit_amount: 61_728, product_data: { name: 'Eye <b>& co</b>' } },
        },
      ],
    });
    const answer = await fetch(url);
    const text = await answer.text();
    expect(text).toContain('Local stand-in, no money moves');
    expect(text).toContain('Eye &lt;b&gt;&amp; co&lt;/b&gt;');
    expect(text).toContain('1,234.56 EUR');
    expect(text).toContain(`href="${session.cancel_url}"`);
    for (const name of Object.keys(FORM)) expect(text).toContain(`<label for="${name}">`);
    expect(text).not.toMatch(/<script|stripe/i);
    expect(answer.headers.get('content-security-policy')).toContain("default-src 'none'");
  });

  test('e-mail known already · is not asked for', async () => {
    const { url, session, send } = await pageOf({ customer_email: 'known@example.test' });
    const text = await (await fetch(url)).text();
    expect(text).not.toContain('name="email"');
    expect(text).toContain('known@example.test');
    expect((await send({ email: '' })).status).toBe(303);
    const paid = await bed.stripe.checkout.sessions.retrieve(session.id);
    expect(paid.customer_details).toMatchObject({ email: 'known@example.test', name: 'Ana' });
  });

  test('paid · sent on with the id of the session in the address', async () => {
    const { session, send } = await pageOf();
    const answer = await send({});
    expect([answer.status, answer.headers.get('location')]).toEqual([
      303,
      `http://127.0.0.1/pay/done?session=${session.id}`,
    ]);
  });

  test.each([
    ['number', '4242 4242', 'Enter all digits'],
    ['number', '4242 4242 4242 4241', 'not valid'],
    ['expiry', '13 / 31', 'Enter month and year'],
    ['expiry', '02 / 26', 'past its date'],
    ['code', '1', 'three or four digits'],
    ['email', 'ana', 'Enter an e-mail address'],
    ['name', ' ', 'Enter the name'],
  ])('%s "%s" · told beside the field, no attempt made', async (field, value, words) => {
    const { send, session } = await pageOf();
    const answer = await send({ [field]: value });
    const text = await answer.text();
    expect(answer.status).toBe(422);
    expect(text).toContain(words);
    expect(text).toContain(`aria-describedby="${field}-wrong"`);
    expect((await bed.stripe.checkout.sessions.retrieve(session.id)).payment_intent).toBeNull();
  });

  test('declined · said in place, number and code not repeated; another card pays', async () => {
    const { send } = await pageOf();
    const answer = await send({ number: '4000000000000002' });
    const text = await answer.text();
    expect([answer.status, text.includes('Your card was declined.')]).toEqual([402, true]);
    expect(text).toContain('value="ana@example.test"');
    expect(text).not.toContain('4000000000000002');
    expect((await send({})).status).toBe(303);
  });

  test('authentication · a step of its own, approved or refused', async () => {
    const { url, send, session } = await pageOf();
    const asked = await send({ number: '4000002760003184' });
    expect(asked.headers.get('location')).toBe(`/pay/${session.id}/authenticate`);
    expect(await (await fetch(`${url}/authenticate`)).text()).toContain('Do you approve');
    const answer = (value: string) =>
      fetch(`${url}/authenticate`, {
        method: 'POST',
        body: new URLSearchParams({ answer: value }),
        redirect: 'manual',
      });
    expect(await (await answer('refuse')).text()).toContain('unable to authenticate');
    await send({ number: '4000002760003184' });
    expect((await answer('approve')).headers.get('location')).toContain('/pay/done');
  });

  test('over · says so: expired with the way back, paid with the way on, unknown', async () => {
    const expired = await pageOf();
    await bed.stripe.checkout.sessions.expire(expired.session.id);
    expect(await (await fetch(expired.url)).text()).toContain('has expired');
    const paid = await pageOf();
    await paid.send({});
    const text = await (await fetch(paid.url)).text();
    expect(text).toContain('This payment is complete');
    expect(text).toContain(`/pay/done?session=${paid.session.id}`);
    expect((await fetch(`${bed.mock.apiUrl}/pay/cs_test_none`)).status).toBe(404);
  });

  test('card numbers · are kept nowhere', async () => {
    const { send } = await pageOf();
    await send({});
    expect(JSON.stringify(await bed.control.dump())).not.toContain('4242424242424242');
  });
});

describe('In a browser, 390 px wide', () => {
  let browser: Browser;
  beforeEach(async () => {
    browser = await chromium.launch({
      executablePath: '/usr/bin/chromium',
      args: ['--no-sandbox', '--disable-gpu'],
    });
  });
  afterEach(() => browser.close());

  const openPage = async (url: string, javaScriptEnabled: boolean) => {
    const viewport = { width: 390, height: 844 };
    const page = await (await browser.newContext({ viewport, javaScriptEnabled })).newPage();
    await page.goto(url);
    return page;
  };

  test('axe · finds nothing, neither in the form nor in its complaints', async () => {
    const { url } = await pageOf();
    const page = await openPage(url, true);
    expect((await new AxeBuilder({ page }).analyze()).violations).toEqual([]);
    await page.getByRole('button', { name: 'Pay 500.00 EUR' }).click();
    await page.getByText('Enter an e-mail address.').waitFor();
    expect((await new AxeBuilder({ page }).analyze()).violations).toEqual([]);
  });

  test('without JavaScript · declined first, then asked to approve, then sent on; nothing overflows', async () => {
    const { session, url } = await pageOf({
      success_url: `${bed.mock.apiUrl}/pay/{CHECKOUT_SESSION_ID}?done`,
    });
    const page = await openPage(url, false);
    const fill = async (number: string) => {
      await page.getByLabel('E-mail').fill('ana@example.test');
      await page.getByLabel('Card number').fill(number);
      await page.getByLabel('Expiry, MM / YY').fill('04 / 31');
      await page.getByLabel('Security code').fill('123');
      await page.getByLabel('Name on card').fill('Ana');
      await page.getByRole('button', { name: 'Pay 500.00 EUR' }).click();
    };
    await fill('4000 0000 0000 0002');
    await page.getByRole('alert').getByText('Your card was declined.').waitFor();
    const box = await page.locator('main').boundingBox();
    expect(box?.width).toBeLessThanOrEqual(390);
    for (const section of await page.locator('section, input, button, table').all()) {
      const { x = 0, width = 0 } = (await section.boundingBox()) ?? {};
      expect(x + width).toBeLessThanOrEqual(390);
    }
    await fill('4000 0027 6000 3184');
    await page.getByRole('button', { name: 'Approve' }).click();
    await page.getByRole('heading', { name: 'This payment is complete' }).waitFor();
    expect(page.url()).toBe(`${bed.mock.apiUrl}/pay/${session.id}?done`);
    expect((await bed.stripe.checkout.sessions.retrieve(session.id)).payment_status).toBe('paid');
  });
});
