import type Stripe from 'stripe';
import { afterEach, beforeEach, describe, expect, test } from 'vitest';
import type { TestBed } from './test-bed.ts';
import { DAY_MS, errorOf, HOUR_MS, openTestBed, payNewSession } from './test-bed.ts';

// Source: the declarations and doc comments of the official SDK 23.1.0, Refunds; the published page on testing.

let bed: TestBed;
beforeEach(async () => {
  bed = await openTestBed();
});
afterEach(() => bed.close());

const chargeAgain = (id: string) => bed.stripe.charges.retrieve(id, { expand: ['refunds'] });
const rowsOf = async (source: string) => (await bed.stripe.balanceTransactions.list({ source })).data;
const typesSince = async (count: number) => {
  await bed.control.idle();
  return bed.receiver.types().slice(count);
};

describe('A refund', () => {
  test('of a part · succeeds, is told twice, and the fee does not come back', async () => {
    const { charge, intent } = await payNewSession(bed, '4242424242424242');
    await bed.control.idle();
    const before = bed.receiver.received.length;
    const refund = await bed.stripe.refunds.create({
      charge: charge.id,
      amount: 20_000,
      reason: 'requested_by_customer',
      metadata: { refund: '1' },
    });
    expect(refund).toMatchObject({
      status: 'succeeded',
      amount: 20_000,
      payment_intent: intent.id,
      metadata: { refund: '1' },
    });
    expect(await typesSince(before)).toEqual(['refund.created', 'charge.refunded']);
    const [row] = await rowsOf(refund.id);
    expect(row).toMatchObject({
      amount: -20_000,
      fee: 0,
      net: -20_000,
      reporting_category: 'refund',
      type: 'refund',
    });
    expect(await chargeAgain(charge.id)).toMatchObject({ amount_refunded: 20_000, refunded: false });
  });

  test('in two parts · sums up, then nothing is left', async () => {
    const { charge, intent } = await payNewSession(bed, '4242424242424242');
    await bed.stripe.refunds.create({ charge: charge.id, amount: 20_000 });
    const rest = await bed.stripe.refunds.create({ payment_intent: intent.id });
    expect(rest.amount).toBe(30_000);
    const after = await chargeAgain(charge.id);
    expect([after.amount_refunded, after.refunded, after.refunds?.data.length]).toEqual([50_000, true, 2]);
    const error = await errorOf(bed.stripe.refunds.create({ charge: charge.id }));
    expect([error.statusCode, error.code]).toEqual([400, 'charge_already_refunded']);
  });

  test('too large · a plain refusal without a code', async () => {
    const { charge } = await payNewSession(bed, '4242424242424242');
    const error = await errorOf(bed.stripe.refunds.create({ charge: charge.id, amount: 50_001 }));
    expect([error.statusCode, error.rawType, error.code, error.param]).toEqual([
      400,
      'invalid_request_error',
      undefined,
      'amount',
    ]);
  });

  test('of a disputed charge · refused, by charge and by intent', async () => {
    const { charge, intent } = await payNewSession(bed, '4000000000000259');
    await bed.control.idle();
    const byCharge = await errorOf(bed.stripe.refunds.create({ charge: charge.id }));
    const byIntent = await errorOf(bed.stripe.refunds.create({ payment_intent: intent.id }));
    expect([byCharge.code, byIntent.code]).toEqual(['charge_disputed', 'refund_disputed_payment']);
  });

  test('neither charge nor intent · refused', async () => {
    expect((await errorOf(bed.stripe.refunds.create({ amount: 1 }))).code).toBe('parameter_missing');
  });

  test('metadata · set, changed, unset', async () => {
    const { charge } = await payNewSession(bed, '4242424242424242');
    const refund = await bed.stripe.refunds.create({ charge: charge.id, metadata: { a: '1', b: '2' } });
    const changed = await bed.stripe.refunds.update(refund.id, { metadata: { a: '', c: '3' } });
    expect(changed.metadata).toEqual({ b: '2', c: '3' });
    expect((await bed.stripe.refunds.update(refund.id, { metadata: '' })).metadata).toEqual({});
  });

  test('list · by charge and by intent', async () => {
    const first = await payNewSession(bed, '4242424242424242');
    const second = await payNewSession(bed, '4242424242424242');
    const one = await bed.stripe.refunds.create({ charge: first.charge.id });
    const two = await bed.stripe.refunds.create({ charge: second.charge.id });
    expect((await bed.stripe.refunds.list({ charge: first.charge.id })).data.map(({ id }) => id)).toEqual([
      one.id,
    ]);
    const byIntent = await bed.stripe.refunds.list({ payment_intent: second.intent.id });
    expect(byIntent.data.map(({ id }) => id)).toEqual([two.id]);
  });
});

describe('The later life of a refund', () => {
  test('to the pending card · pending, then succeeded', async () => {
    const { charge } = await payNewSession(bed, '4000000000007726');
    const refund = await bed.stripe.refunds.create({ charge: charge.id });
    expect([refund.status, refund.pending_reason]).toEqual(['pending', 'processing']);
    const before = bed.receiver.received.length + 2;
    await bed.control.advanceClock(HOUR_MS);
    const settled = await bed.stripe.refunds.retrieve(refund.id);
    expect([settled.status, settled.pending_reason]).toEqual(['succeeded', undefined]);
    expect(await typesSince(before)).toEqual(['refund.updated', 'charge.refund.updated']);
  });

  test('to the card that fails later · succeeded, then failed with the money back, and free to be made again', async () => {
    const { charge } = await payNewSession(bed, '4000000000005126');
    const refund = await bed.stripe.refunds.create({ charge: charge.id });
    expect(refund.status).toBe('succeeded');
    const before = bed.receiver.received.length + 2;
    await bed.control.advanceClock(2 * DAY_MS);
    const failed = await bed.stripe.refunds.retrieve(refund.id, { expand: ['failure_balance_transaction'] });
    expect([failed.status, failed.failure_reason]).toEqual(['failed', 'expired_or_canceled_card']);
    const back = failed.failure_balance_transaction as Stripe.BalanceTransaction;
    expect([back.amount, back.fee, back.reporting_category]).toEqual([50_000, 0, 'refund_failure']);
    expect((await typesSince(before)).filter((type) => type.includes('refund'))).toEqual([
      'refund.updated',
      'charge.refund.updated',
      'refund.failed',
    ]);
    expect(await chargeAgain(charge.id)).toMatchObject({ amount_refunded: 0, refunded: false });
    expect((await bed.stripe.refunds.create({ charge: charge.id })).amount).toBe(50_000);
  });

  test('made to fail by hand, twice · the money comes back once', async () => {
    const { charge } = await payNewSession(bed, '4242424242424242');
    const refund = await bed.stripe.refunds.create({ charge: charge.id });
    await bed.control.failRefund(refund.id);
    await bed.control.failRefund(refund.id);
    expect((await rowsOf(refund.id)).map(({ amount }) => amount)).toEqual([50_000, -50_000]);
  });

  test('short balance · pending without a row, until the money is available', async () => {
    await bed.control.set({ shortBalance: true });
    const { charge } = await payNewSession(bed, '4242424242424242', { amount: 50_000 });
    await payNewSession(bed, '4242424242424242', { amount: 90_000 });
    const refund = await bed.stripe.refunds.create({ charge: charge.id });
    expect([refund.status, refund.pending_reason, refund.balance_transaction]).toEqual([
      'pending',
      'insufficient_funds',
      null,
    ]);
    await bed.control.advanceClock(DAY_MS);
    expect((await bed.stripe.refunds.retrieve(refund.id)).status).toBe('pending');
    await bed.control.advanceClock(2 * DAY_MS);
    const settled = await bed.stripe.refunds.retrieve(refund.id);
    expect(settled.status).toBe('succeeded');
    expect(await rowsOf(refund.id)).toHaveLength(1);
  });

  test('only one that waits for the payer · can be cancelled', async () => {
    const { charge } = await payNewSession(bed, '4000000000007726');
    const refund = await bed.stripe.refunds.create({ charge: charge.id });
    expect((await errorOf(bed.stripe.refunds.cancel(refund.id))).statusCode).toBe(400);
    expect((await bed.control.requireRefundAction(refund.id)).status).toBe('requires_action');
    expect((await bed.stripe.refunds.cancel(refund.id)).status).toBe('canceled');
    expect((await chargeAgain(charge.id)).amount_refunded).toBe(0);
    expect((await rowsOf(refund.id)).reduce((sum, row) => sum + row.net, 0)).toBe(0);
  });
});
