import Stripe from 'stripe';
import { afterEach, beforeEach, describe, expect, test } from 'vitest';
import { DEFAULT_SECRET_KEY } from '#stand-ins/stripe-mock/start-stripe-mock';
import type { TestBed } from './test-bed.ts';
import { errorOf, openSession, openTestBed, payNewSession, sdkFor, sessionParameters } from './test-bed.ts';

// Source: the service's published page on errors, and the official SDK's error classes.

let bed: TestBed;
beforeEach(async () => {
  bed = await openTestBed();
});
afterEach(() => bed.close());

describe('Who asks', () => {
  test('a wrong key · 401', async () => {
    const error = await errorOf(sdkFor(bed.mock, {}, 'sk_test_wrong').balance.retrieve());
    expect([error.statusCode, error.type]).toEqual([401, 'StripeAuthenticationError']);
    expect(error.message).not.toContain('sk_test_wrong');
  });

  test('no key · 401; the key as basic user name · accepted', async () => {
    expect((await fetch(`${bed.mock.apiUrl}/v1/balance`)).status).toBe(401);
    const authorization = `Basic ${Buffer.from(`${DEFAULT_SECRET_KEY}:`).toString('base64')}`;
    expect((await fetch(`${bed.mock.apiUrl}/v1/balance`, { headers: { authorization } })).status).toBe(200);
  });
});

describe('What is not there', () => {
  const NOTHING: readonly (readonly [string, (stripe: Stripe) => Promise<unknown>])[] = [
    ['session', (stripe) => stripe.checkout.sessions.retrieve('cs_test_none')],
    ['payment intent', (stripe) => stripe.paymentIntents.retrieve('pi_none')],
    ['charge', (stripe) => stripe.charges.retrieve('ch_none')],
    ['refund', (stripe) => stripe.refunds.retrieve('re_none')],
    ['dispute', (stripe) => stripe.disputes.retrieve('dp_none')],
    ['balance transaction', (stripe) => stripe.balanceTransactions.retrieve('txn_none')],
    ['payout', (stripe) => stripe.payouts.retrieve('po_none')],
    ['rows of a payout', (stripe) => stripe.balanceTransactions.list({ payout: 'po_none' })],
    ['event', (stripe) => stripe.events.retrieve('evt_none')],
    ['customer', (stripe) => stripe.customers.retrieve('cus_none')],
  ];

  test.each(NOTHING)('%s · 404 resource_missing', async (_, call) => {
    const error = await errorOf(call(bed.stripe));
    expect([error.statusCode, error.code, error.type]).toEqual([
      404,
      'resource_missing',
      'StripeInvalidRequestError',
    ]);
  });

  test('a part of the API the stand-in does not have · 404', async () => {
    const error = await errorOf(bed.stripe.subscriptions.list());
    expect([error.statusCode, error.rawType]).toEqual([404, 'invalid_request_error']);
    expect(error.message).toContain('GET: /v1/subscriptions');
  });

  test('an intent of a session · cannot be cancelled by itself', async () => {
    const { intent } = await payNewSession(bed, '4242424242424242');
    expect((await errorOf(bed.stripe.paymentIntents.cancel(intent.id))).statusCode).toBe(404);
  });
});

describe('What cannot be read', () => {
  test.each([
    ['parameter_missing', 'success_url', { success_url: undefined }],
    ['parameter_invalid_empty', 'success_url', { success_url: '' }],
    ['parameter_unknown', 'nonsense', { nonsense: 'x' }],
    ['parameter_unknown', 'line_items[0][nonsense]', { line_items: [{ quantity: 1, nonsense: 1 }] }],
    ['parameter_missing', 'line_items[0][price_data]', { line_items: [{ quantity: 1 }] }],
    ['parameter_invalid_integer', 'expires_at', { expires_at: 'soon' }],
    ['url_invalid', 'success_url', { success_url: 'javascript:alert(1)' }],
  ])('%s · names %s', async (code, param, spoiled) => {
    const call = bed.stripe.checkout.sessions.create({ ...sessionParameters(), ...spoiled } as never);
    const error = await errorOf(call);
    expect([error.statusCode, error.code, error.param]).toEqual([400, code, param]);
  });

  test('metadata that is too long · names the key', async () => {
    const error = await errorOf(openSession(bed, { metadata: { note: 'x'.repeat(501) } }));
    expect(error.param).toBe('metadata[note]');
  });

  test('an expansion that leads nowhere · refused', async () => {
    const { id } = await openSession(bed);
    const error = await errorOf(bed.stripe.checkout.sessions.retrieve(id, { expand: ['nonsense'] }));
    expect([error.statusCode, error.param]).toEqual([400, 'expand']);
  });
});

describe('What was asked', () => {
  test('every call · is recorded with its parameters, key and answer, but never the secret key', async () => {
    await openSession(bed, { amount: 7_500 }, { idempotencyKey: 'k-1' });
    await errorOf(bed.stripe.refunds.retrieve('re_none'));
    const [create, missing] = await bed.control.requests();
    expect(create).toMatchObject({
      method: 'POST',
      path: '/v1/checkout/sessions',
      idempotencyKey: 'k-1',
      apiVersion: Stripe.API_VERSION,
      status: 200,
      replayed: false,
    });
    // As it goes over the line: every value is a text.
    expect(create?.parameters).toMatchObject({ line_items: [{ price_data: { unit_amount: '7500' } }] });
    expect(missing).toMatchObject({ method: 'GET', path: '/v1/refunds/re_none', status: 404 });
    expect(JSON.stringify(await bed.control.dump())).not.toContain(DEFAULT_SECRET_KEY);
  });
});
