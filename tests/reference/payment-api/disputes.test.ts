import { afterEach, beforeEach, describe, expect, test } from 'vitest';
import type { TestBed } from './test-bed.ts';
import { DAY_MS, errorOf, openTestBed, payNewSession } from './test-bed.ts';

// Source: the declarations and doc comments of the official SDK 23.1.0, Disputes; the published page on testing.

let bed: TestBed;
beforeEach(async () => {
  bed = await openTestBed();
});
afterEach(() => bed.close());

const disputeTypes = async () => {
  await bed.control.idle();
  return bed.receiver.types().filter((type) => type.startsWith('charge.dispute'));
};
const disputesOf = async (charge: string) => (await bed.stripe.disputes.list({ charge })).data;

async function disputedCharge() {
  const paid = await payNewSession(bed, '4000000000000259');
  await bed.control.idle();
  const [dispute] = await disputesOf(paid.charge.id);
  if (dispute === undefined) throw new Error('The disputed card brought no dispute');
  return { ...paid, dispute };
}

describe('A chargeback', () => {
  test('of the disputed card · takes amount and fee at once', async () => {
    const { charge, dispute } = await disputedCharge();
    expect(dispute).toMatchObject({
      status: 'needs_response',
      amount: 50_000,
      reason: 'fraudulent',
      is_charge_refundable: false,
    });
    expect(
      dispute.balance_transactions.map(({ amount, fee, net, reporting_category }) => [
        amount,
        fee,
        net,
        reporting_category,
      ]),
    ).toEqual([[-50_000, 2_000, -52_000, 'dispute']]);
    expect((await bed.stripe.charges.retrieve(charge.id)).disputed).toBe(true);
    expect(await disputeTypes()).toEqual(['charge.dispute.created', 'charge.dispute.funds_withdrawn']);
  });

  test('won · the amount comes back, the fee does not', async () => {
    const { dispute } = await disputedCharge();
    const answered = await bed.stripe.disputes.update(dispute.id, {
      evidence: { product_description: 'Surgery' },
      submit: true,
    });
    expect([answered.status, answered.evidence_details.submission_count]).toEqual(['under_review', 1]);
    const won = await bed.control.closeDispute(dispute.id, true);
    expect(won.status).toBe('won');
    expect(won.balance_transactions.map(({ net, reporting_category }) => [net, reporting_category])).toEqual([
      [-52_000, 'dispute'],
      [50_000, 'dispute_reversal'],
    ]);
    expect(await disputeTypes()).toEqual([
      'charge.dispute.created',
      'charge.dispute.funds_withdrawn',
      'charge.dispute.updated',
      'charge.dispute.closed',
      'charge.dispute.funds_reinstated',
    ]);
  });

  test('lost · nothing comes back', async () => {
    const { dispute } = await disputedCharge();
    await bed.control.respond(dispute.id);
    const lost = await bed.control.closeDispute(dispute.id, false);
    expect([lost.status, lost.balance_transactions.length]).toEqual(['lost', 1]);
    expect((await disputeTypes()).at(-1)).toBe('charge.dispute.closed');
  });

  test('given up · lost', async () => {
    const { dispute } = await disputedCharge();
    expect((await bed.stripe.disputes.close(dispute.id)).status).toBe('lost');
    expect((await errorOf(bed.stripe.disputes.close(dispute.id))).statusCode).toBe(400);
  });

  test('evidence kept, not sent · still waits for a response', async () => {
    const { dispute } = await disputedCharge();
    const staged = await bed.stripe.disputes.update(dispute.id, {
      evidence: { receipt: 'file_1' },
      submit: false,
    });
    expect([staged.status, staged.evidence.receipt, staged.evidence_details.has_evidence]).toEqual([
      'needs_response',
      'file_1',
      true,
    ]);
    expect((await bed.stripe.disputes.update(dispute.id, { submit: true })).status).toBe('under_review');
  });

  test('nobody answers in time · lost by the clock', async () => {
    const { dispute } = await disputedCharge();
    await bed.control.advanceClock(9 * DAY_MS - 1);
    expect((await bed.stripe.disputes.retrieve(dispute.id)).status).toBe('needs_response');
    await bed.control.advanceClock(1);
    expect((await bed.stripe.disputes.retrieve(dispute.id)).status).toBe('lost');
  });

  test('more than the charge, and a second one · both possible', async () => {
    const { charge, session } = await payNewSession(bed, '4242424242424242');
    const first = await bed.control.openDispute(session.id, { amount: 60_000, reason: 'general' });
    expect([first.amount, first.charge]).toEqual([60_000, charge.id]);
    await bed.control.openDispute(charge.id, { amount: 1_000 });
    expect((await disputesOf(charge.id)).map(({ amount }) => amount)).toEqual([1_000, 60_000]);
  });
});

describe('An inquiry', () => {
  test('of the inquiry card · asks, moves no money, and closes', async () => {
    const { charge } = await payNewSession(bed, '4000000000001976');
    await bed.control.idle();
    const [inquiry] = await disputesOf(charge.id);
    expect(inquiry).toMatchObject({
      status: 'warning_needs_response',
      balance_transactions: [],
      is_charge_refundable: true,
    });
    const id = inquiry?.id ?? '';
    expect((await bed.control.respond(id)).status).toBe('warning_under_review');
    const closed = await bed.control.closeDispute(id, false);
    expect([closed.status, closed.balance_transactions]).toEqual(['warning_closed', []]);
    expect(await disputeTypes()).toEqual([
      'charge.dispute.created',
      'charge.dispute.updated',
      'charge.dispute.closed',
    ]);
  });

  test('its charge · can be refunded', async () => {
    const { charge } = await payNewSession(bed, '4000000000001976');
    await bed.control.idle();
    expect((await bed.stripe.refunds.create({ charge: charge.id })).status).toBe('succeeded');
  });
});
