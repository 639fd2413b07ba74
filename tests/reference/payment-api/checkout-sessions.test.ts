import { afterEach, beforeEach, describe, expect, test } from 'vitest';
import type { TestBed } from './test-bed.ts';
import {
  DAY_MS,
  errorOf,
  HOUR_MS,
  MINUTE_MS,
  openSession,
  openTestBed,
  payNewSession,
  START_SECONDS,
  sessionParameters,
} from './test-bed.ts';

// Source: the declarations and doc comments of the official SDK 23.1.0, Checkout/Sessions.

let bed: TestBed;
beforeEach(async () => {
  bed = await openTestBed();
});
afterEach(() => bed.close());

describe('A new session', () => {
  test('as the application makes it · open, unpaid, with an address and no payment intent yet', async () => {
    const session = await openSession(bed, { amount: 123_456 });
    expect(session).toMatchObject({
      object: 'checkout.session',
      status: 'open',
      payment_status: 'unpaid',
      amount_total: 123_456,
      currency: 'eur',
      payment_intent: null,
      client_reference_id: 'attempt-1',
      metadata: { attempt: 'attempt-1' },
      created: START_SECONDS,
      expires_at: START_SECONDS + 86_400,
      adaptive_pricing: { enabled: false },
      allowed_payment_method_types: ['card'],
    });
    expect(session.url).toMatch(/^http:\/\/127\.0\.0\.1:\d+\/pay\/cs_test_/);
    expect(session.line_items).toBeUndefined();
  });

  test('line items · only when asked for, and by their own list', async () => {
    const { id } = await openSession(bed, {
      line_items: [
        {
          quantity: 2,
          price_data: { currency: 'eur', unit_amount: 100, product_data: { name: 'Each eye' } },
        },
        { quantity: 1, price_data: { currency: 'eur', unit_amount: 50, product_data: { name: 'Cover' } } },
      ],
    });
    const expanded = await bed.stripe.checkout.sessions.retrieve(id, { expand: ['line_items'] });
    expect(expanded.amount_total).toBe(250);
    expect(
      expanded.line_items?.data.map((item) => [item.description, item.quantity, item.amount_total]),
    ).toEqual([
      ['Each eye', 2, 200],
      ['Cover', 1, 50],
    ]);
    const firstPage = await bed.stripe.checkout.sessions.listLineItems(id, { limit: 1 });
    expect([firstPage.data.length, firstPage.has_more]).toEqual([1, true]);
  });

  test('metadata · stays with the session; the intent has its own', async () => {
    const { session, intent, charge } = await payNewSession(bed, '4242424242424242', {
      metadata: { where: 'session' },
      payment_intent_data: { metadata: { where: 'intent' } },
    });
    expect(session.metadata).toEqual({ where: 'session' });
    expect(intent.metadata).toEqual({ where: 'intent' });
    expect(charge.metadata).toEqual({ where: 'intent' });
  });

  test('a customer · is named, and gives the address of the receipt', async () => {
    const customer = await bed.stripe.customers.create({
      email: 'ana@example.test',
      name: 'Ana',
      metadata: { file: '7' },
    });
    const session = await openSession(bed, { customer: customer.id });
    expect([session.customer, session.customer_email]).toEqual([customer.id, 'ana@example.test']);
    expect((await bed.stripe.customers.retrieve(customer.id)).id).toBe(customer.id);
  });
});

describe('A session that is refused', () => {
  const price = (currency: string, unit_amount: number) => ({
    line_items: [{ quantity: 1, price_data: { currency, unit_amount, product_data: { name: 'Deposit' } } }],
  });

  // Source of the least charges: the service's published page on currencies.
  test.each([
    ['eur', 49, 50],
    ['gbp', 29, 30],
    ['dkk', 249, 250],
    ['czk', 1_499, 1_500],
    ['huf', 17_499, 17_500],
    ['jpy', 49, 50],
  ])('%s · %i is too little, %i is enough', async (currency, little, enough) => {
    const error = await errorOf(openSession(bed, price(currency, little)));
    expect([error.statusCode, error.code]).toEqual([400, 'amount_too_small']);
    expect((await openSession(bed, price(currency, enough))).amount_total).toBe(enough);
  });

  test.each([
    ['isk', 12_345],
    ['ugx', 500_050],
    ['kwd', 5_005],
  ])('%s %i · the last digits must be zero', async (currency, amount) => {
    const error = await errorOf(openSession(bed, price(currency, amount)));
    expect([error.statusCode, error.param]).toEqual([400, 'line_items[0][price_data][unit_amount]']);
  });

  test.each([
    ['too soon', 30 * 60 - 1],
    ['too late', 24 * 60 * 60 + 1],
  ])('expiry %s · names the parameter', async (_, seconds) => {
    const error = await errorOf(openSession(bed, { expires_at: START_SECONDS + seconds }));
    expect([error.statusCode, error.param]).toEqual([400, 'expires_at']);
  });

  test('a long reference · names the parameter', async () => {
    const error = await errorOf(openSession(bed, { client_reference_id: 'x'.repeat(201) }));
    expect([error.statusCode, error.param]).toEqual([400, 'client_reference_id']);
  });

  test('payment_method_types · is gone from this version', async () => {
    const gone = { ...sessionParameters(), payment_method_types: ['card'] };
    const error = await errorOf(bed.stripe.checkout.sessions.create(gone as never));
    expect([error.code, error.param]).toEqual(['parameter_unknown', 'payment_method_types']);
  });

  test('two currencies · names the second', async () => {
    const line_items = [...price('eur', 500).line_items, ...price('usd', 500).line_items];
    const error = await errorOf(openSession(bed, { line_items }));
    expect(error.param).toBe('line_items[1][price_data][currency]');
  });
});

describe('The end of a session', () => {
  test('expired by us · no address, an event, and never again', async () => {
    const { id } = await openSession(bed);
    const expired = await bed.stripe.checkout.sessions.expire(id);
    expect([expired.status, expired.payment_status, expired.url]).toEqual(['expired', 'unpaid', null]);
    await bed.control.idle();
    expect(bed.receiver.types()).toEqual(['checkout.session.expired']);
    const again = await errorOf(bed.stripe.checkout.sessions.expire(id));
    expect([again.statusCode, again.rawType]).toEqual([400, 'invalid_request_error']);
    expect((await bed.control.pay(id)).outcome).toBe('not_open');
  });

  test('its time is over · expires by itself, then and not before', async () => {
    const { id, expires_at } = await openSession(bed, { expires_at: START_SECONDS + 31 * 60 });
    await bed.control.advanceClock(31 * MINUTE_MS - 1);
    expect((await bed.stripe.checkout.sessions.retrieve(id)).status).toBe('open');
    await bed.control.advanceClock(HOUR_MS);
    expect((await bed.stripe.checkout.sessions.retrieve(id)).status).toBe('expired');
    const [event] = (await bed.stripe.events.list({ type: 'checkout.session.expired' })).data;
    expect(event?.created).toBe(expires_at);
  });

  test('paid · complete, no address, and cannot be expired', async () => {
    const { session } = await payNewSession(bed, '4242424242424242');
    expect([session.status, session.payment_status, session.url]).toEqual(['complete', 'paid', null]);
    const error = await errorOf(bed.stripe.checkout.sessions.expire(session.id));
    expect(error.statusCode).toBe(400);
    await bed.control.advanceClock(2 * DAY_MS);
    expect((await bed.stripe.checkout.sessions.retrieve(session.id)).status).toBe('complete');
  });

  test('expired after a decline · its intent is given up with it', async () => {
    const { id } = await openSession(bed);
    await bed.control.pay(id, '4000000000000002');
    const { payment_intent } = await bed.stripe.checkout.sessions.expire(id);
    expect((await bed.stripe.paymentIntents.retrieve(String(payment_intent))).status).toBe('canceled');
  });
});

describe('The list of sessions', () => {
  test('without a limit · ten, the newest first, and more to come', async () => {
    const made: string[] = [];
    for (let count = 0; count < 12; count += 1) made.push((await openSession(bed)).id);
    const page = await bed.stripe.checkout.sessions.list();
    expect(page.data.map(({ id }) => id)).toEqual(made.toReversed().slice(0, 10));
    expect(page.has_more).toBe(true);
  });

  test('cursors · walk forth and back without loss', async () => {
    const made: string[] = [];
    for (let count = 0; count < 7; count += 1) made.push((await openSession(bed)).id);
    const newestFirst = made.toReversed();
    const walked: string[] = [];
    for await (const session of bed.stripe.checkout.sessions.list({ limit: 3 })) walked.push(session.id);
    expect(walked).toEqual(newestFirst);
    const before = await bed.stripe.checkout.sessions.list({ limit: 2, ending_before: newestFirst[3] ?? '' });
    expect([before.data.map(({ id }) => id), before.has_more]).toEqual([newestFirst.slice(1, 3), true]);
  });

  test.each([0, 101])('limit %i · refused', async (limit) => {
    const error = await errorOf(bed.stripe.checkout.sessions.list({ limit }));
    expect([error.statusCode, error.param]).toEqual([400, 'limit']);
  });

  test('a cursor that names nothing · refused', async () => {
    const error = await errorOf(bed.stripe.checkout.sessions.list({ starting_after: 'cs_test_none' }));
    expect([error.statusCode, error.code, error.param]).toEqual([400, 'resource_missing', 'starting_after']);
  });

  test('filters · by state, time and payment intent', async () => {
    const { session, intent } = await payNewSession(bed, '4242424242424242');
    await bed.control.advanceClock(MINUTE_MS);
    const later = await openSession(bed);
    const ids = async (filter: object) =>
      (await bed.stripe.checkout.sessions.list(filter)).data.map(({ id }) => id);
    expect(await ids({ status: 'open' })).toEqual([later.id]);
    expect(await ids({ payment_intent: intent.id })).toEqual([session.id]);
    expect(await ids({ created: { gt: START_SECONDS } })).toEqual([later.id]);
    expect(await ids({ created: { lte: START_SECONDS } })).toEqual([session.id]);
  });
});
