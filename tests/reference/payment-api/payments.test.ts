import type Stripe from 'stripe';
import { afterEach, beforeEach, describe, expect, test } from 'vitest';
import type { TestBed } from './test-bed.ts';
import { openSession, openTestBed, payNewSession } from './test-bed.ts';

// Source of the test numbers and what they do: the service's published page on testing.

let bed: TestBed;
beforeEach(async () => {
  bed = await openTestBed();
});
afterEach(() => bed.close());

const intentOf = async (sessionId: string): Promise<Stripe.PaymentIntent> => {
  const session = await bed.stripe.checkout.sessions.retrieve(sessionId, { expand: ['payment_intent'] });
  return session.payment_intent as Stripe.PaymentIntent;
};

describe('A card that is accepted', () => {
  test('events · in their order, then the fee', async () => {
    await payNewSession(bed, '4242424242424242');
    await bed.control.idle();
    expect(bed.receiver.types()).toEqual([
      'payment_intent.created',
      'charge.succeeded',
      'payment_intent.succeeded',
      'checkout.session.completed',
      'charge.updated',
    ]);
    const [, succeeded, , , updated] = bed.receiver.received.map(
      ({ body }) => JSON.parse(body) as Stripe.Event,
    );
    expect(succeeded?.data.object).toMatchObject({ balance_transaction: null });
    expect(updated?.data.previous_attributes).toEqual({ balance_transaction: null });
  });

  test('objects · agree about the money', async () => {
    const { session, intent, charge } = await payNewSession(bed, '4242424242424242', { amount: 123_456 });
    expect([session.amount_total, intent.amount_received, charge.amount_captured]).toEqual([
      123_456, 123_456, 123_456,
    ]);
    expect([intent.status, charge.status, charge.paid, charge.payment_intent]).toEqual([
      'succeeded',
      'succeeded',
      true,
      intent.id,
    ]);
    const row = await bed.stripe.balanceTransactions.retrieve(String(charge.balance_transaction));
    // Own arithmetic on the stand-in's invented tariff: 1.4 % of 1,234.56 is 17.28, and 0.25.
    expect(row).toMatchObject({
      amount: 123_456,
      fee: 1_753,
      net: 121_703,
      reporting_category: 'charge',
      source: charge.id,
    });
  });

  test('fee held back · no balance transaction until it is attached', async () => {
    await bed.control.set({ feeDelayMs: 3_600_000 });
    const { charge } = await payNewSession(bed, '4242424242424242');
    expect(charge.balance_transaction).toBeNull();
    expect((await bed.stripe.balance.retrieve()).pending[0]?.amount).toBe(0);
    await bed.control.advanceClock(3_600_000);
    const booked = await bed.stripe.charges.retrieve(charge.id, { expand: ['balance_transaction'] });
    expect((booked.balance_transaction as Stripe.BalanceTransaction).net).toBe(50_000 - 725);
  });
});

describe('A card that is refused', () => {
  test.each([
    ['4000000000000002', 'card_declined', 'generic_decline'],
    ['4000000000009995', 'card_declined', 'insufficient_funds'],
    ['4000000000000069', 'expired_card', 'expired_card'],
    ['4000000000000127', 'incorrect_cvc', 'incorrect_cvc'],
    ['4000000000000119', 'processing_error', 'processing_error'],
    ['5555555555554444', 'card_declined', 'test_mode_live_card'],
  ])('%s · %s, %s; the session stays open for another', async (number, code, declineCode) => {
    const { id } = await openSession(bed);
    const result = await bed.control.pay(id, number);
    expect([result.outcome, result.returnUrl]).toEqual(['declined', null]);
    const intent = await intentOf(id);
    expect(intent.status).toBe('requires_payment_method');
    expect(intent.last_payment_error).toMatchObject({ type: 'card_error', code, decline_code: declineCode });
    await bed.control.idle();
    expect(bed.receiver.types()).toEqual([
      'payment_intent.created',
      'charge.failed',
      'payment_intent.payment_failed',
    ]);
    expect((await bed.stripe.checkout.sessions.retrieve(id)).status).toBe('open');
    expect((await bed.stripe.balanceTransactions.list()).data).toEqual([]);
  });

  test('then one that is accepted · the same intent, one charge failed and one paid', async () => {
    const { id } = await openSession(bed);
    await bed.control.pay(id, '4000000000000002');
    const declined = await intentOf(id);
    expect((await bed.control.pay(id)).outcome).toBe('paid');
    const paid = await intentOf(id);
    expect([paid.id, paid.status, paid.last_payment_error]).toEqual([declined.id, 'succeeded', null]);
    const charges = await bed.stripe.charges.list({ payment_intent: paid.id });
    expect(charges.data.map(({ status }) => status)).toEqual(['succeeded', 'failed']);
  });
});

describe('A card that must be authenticated', () => {
  const NUMBER = '4000002760003184';

  test('not answered yet · waits, with an event and an address', async () => {
    const { id } = await openSession(bed);
    expect((await bed.control.pay(id, NUMBER, { authentication: null })).outcome).toBe('must_authenticate');
    const intent = await intentOf(id);
    expect([intent.status, intent.next_action?.type]).toEqual(['requires_action', 'redirect_to_url']);
    expect(intent.next_action?.redirect_to_url?.url).toBe(`${bed.mock.apiUrl}/pay/${id}/authenticate`);
    await bed.control.idle();
    expect(bed.receiver.types()).toEqual(['payment_intent.created', 'payment_intent.requires_action']);
  });

  test('approved · paid, and the charge says so', async () => {
    const { charge } = await payNewSession(bed, NUMBER);
    expect(charge.payment_method_details?.card?.three_d_secure?.result).toBe('authenticated');
  });

  test('refused · no charge, the session stays open', async () => {
    const { id } = await openSession(bed);
    expect((await bed.control.pay(id, NUMBER, { authentication: 'refuse' })).outcome).toBe('declined');
    const intent = await intentOf(id);
    expect([intent.status, intent.last_payment_error?.code, intent.latest_charge]).toEqual([
      'requires_payment_method',
      'payment_intent_authentication_failure',
      null,
    ]);
    expect((await bed.control.pay(id)).outcome).toBe('paid');
  });

  test('approved, then declined · a failed charge', async () => {
    const { id } = await openSession(bed);
    expect((await bed.control.pay(id, '4000008400001629')).outcome).toBe('declined');
    expect((await intentOf(id)).last_payment_error?.code).toBe('card_declined');
  });

  test('the session expires meanwhile · approving comes too late', async () => {
    const { id } = await openSession(bed);
    await bed.control.pay(id, NUMBER, { authentication: null });
    await bed.stripe.checkout.sessions.expire(id);
    const answer = await fetch(`${bed.mock.apiUrl}/pay/${id}/authenticate`, {
      method: 'POST',
      body: new URLSearchParams({ answer: 'approve' }),
    });
    expect(await answer.text()).toContain('has expired');
    expect((await bed.stripe.charges.list()).data).toEqual([]);
  });
});

describe('One debt, two sessions', () => {
  test('both paid · the service lets it happen', async () => {
    const first = await payNewSession(bed, '4242424242424242');
    const second = await payNewSession(bed, '4242424242424242');
    expect(first.intent.id).not.toBe(second.intent.id);
  });

  test('one session, two payers at once · only the first pays', async () => {
    const { id } = await openSession(bed);
    const outcomes = await Promise.all([bed.control.pay(id), bed.control.pay(id)]);
    expect(outcomes.map(({ outcome }) => outcome).sort()).toEqual(['not_open', 'paid']);
    expect((await bed.stripe.charges.list()).data).toHaveLength(1);
  });
});
