import type Stripe from 'stripe';
import { afterEach, beforeEach, describe, expect, test } from 'vitest';
import type { TestBed } from './test-bed.ts';
import { DAY_MS, errorOf, HOUR_MS, openTestBed, payNewSession, START_SECONDS } from './test-bed.ts';

// Source: the declarations and doc comments of the official SDK 23.1.0, Payouts and BalanceTransactions.
// The tariff (1.4 % and 0.25) and the hours of the day are the stand-in's own.

let bed: TestBed;
beforeEach(async () => {
  bed = await openTestBed();
});
afterEach(() => bed.close());

const CARD = '4242424242424242';
const rowsOf = async (payout: string) =>
  (await bed.stripe.balanceTransactions.list({ payout, limit: 100 })).data;
const netSum = (rows: readonly Stripe.BalanceTransaction[]) => rows.reduce((sum, row) => sum + row.net, 0);
const seconds = (iso: string) => Date.parse(iso) / 1_000;
const payoutTypes = () => bed.receiver.types().filter((type) => type.startsWith('payout'));

async function balanceNow() {
  const { available, pending } = await bed.stripe.balance.retrieve();
  return [available[0]?.amount, pending[0]?.amount];
}

async function onlyPayout(): Promise<Stripe.Payout> {
  const [payout, ...others] = (await bed.stripe.payouts.list()).data;
  if (payout === undefined || others.length > 0)
    throw new Error(`Expected one payout, found ${others.length + 1}`);
  return payout;
}

describe('The way of the money', () => {
  test('a charge · pending, available on the second day, paid out that morning, in the bank the next', async () => {
    await payNewSession(bed, CARD, { amount: 50_000 });
    expect(await balanceNow()).toEqual([0, 49_275]);
    await bed.control.advanceClock(DAY_MS);
    expect(await balanceNow()).toEqual([0, 49_275]);
    await bed.control.advanceClock(15 * HOUR_MS);
    expect(await balanceNow()).toEqual([49_275, 0]);
    await bed.control.advanceClock(6 * HOUR_MS);
    expect(await balanceNow()).toEqual([0, 0]);
    const made = await onlyPayout();
    expect(made).toMatchObject({
      status: 'pending',
      amount: 49_275,
      automatic: true,
      created: seconds('2026-03-04T06:00:00Z'),
      arrival_date: seconds('2026-03-05T00:00:00Z'),
      reconciliation_status: 'in_progress',
    });
    await bed.control.advanceClock(HOUR_MS);
    expect(await onlyPayout()).toMatchObject({ status: 'in_transit', reconciliation_status: 'completed' });
    await bed.control.advanceClock(DAY_MS + HOUR_MS);
    expect((await onlyPayout()).status).toBe('paid');
    expect(payoutTypes()).toEqual([
      'payout.created',
      'payout.updated',
      'payout.reconciliation_completed',
      'payout.paid',
    ]);
  });

  test('rows of a payout · its own among them, together nothing', async () => {
    const { charge } = await payNewSession(bed, CARD, { amount: 50_000 });
    await payNewSession(bed, CARD, { amount: 30_000 });
    await bed.stripe.refunds.create({ charge: charge.id, amount: 10_000 });
    await bed.control.advanceClock(3 * DAY_MS);
    const payouts = (await bed.stripe.payouts.list()).data;
    const [payout] = payouts;
    if (payout === undefined) throw new Error('No payout was made');
    const rows = await rowsOf(payout.id);
    expect(netSum(rows)).toBe(0);
    expect(rows.map(({ reporting_category }) => reporting_category).sort()).toEqual([
      'charge',
      'charge',
      'payout',
      'refund',
    ]);
    const own = rows.find(({ type }) => type === 'payout');
    expect([own?.source, own?.net, own?.id]).toEqual([payout.id, -payout.amount, payout.balance_transaction]);
  });

  test('every row · net is amount less fee, and all rows are the balance', async () => {
    await payNewSession(bed, CARD, { amount: 33_333 });
    await payNewSession(bed, '4000000000000259', { amount: 12_345 });
    await bed.control.advanceClock(5 * DAY_MS);
    await payNewSession(bed, CARD, { amount: 7_777 });
    const rows = (await bed.stripe.balanceTransactions.list({ limit: 100 })).data;
    expect(rows.filter(({ net, amount, fee }) => net !== amount - fee)).toEqual([]);
    const [available = 0, pending = 0] = await balanceNow();
    expect(netSum(rows)).toBe(available + pending);
  });

  test('filters · by type, source and time', async () => {
    const { charge } = await payNewSession(bed, CARD);
    await bed.control.advanceClock(3 * DAY_MS);
    const list = async (filter: Stripe.BalanceTransactionListParams) =>
      (await bed.stripe.balanceTransactions.list({ ...filter, expand: ['data.source'] })).data;
    const [row, ...rest] = await list({ type: 'charge' });
    expect([row?.source, rest]).toMatchObject([{ id: charge.id, object: 'charge' }, []]);
    expect((await list({ source: charge.id })).map(({ id }) => id)).toEqual([row?.id]);
    expect((await list({ created: { gt: START_SECONDS } })).map(({ type }) => type)).toEqual(['payout']);
  });
});

describe('A payout that goes wrong', () => {
  test('fails after it was paid · the money comes back and goes out with the next', async () => {
    await payNewSession(bed, CARD, { amount: 50_000 });
    await bed.control.advanceClock(4 * DAY_MS);
    const paid = await onlyPayout();
    expect(paid.status).toBe('paid');
    const failed = await bed.control.failPayout(paid.id);
    expect([failed.status, failed.failure_code]).toEqual(['failed', 'account_closed']);
    expect(await balanceNow()).toEqual([49_275, 0]);
    expect(netSum(await rowsOf(paid.id))).toBe(0);
    await bed.control.advanceClock(DAY_MS);
    const [next] = (await bed.stripe.payouts.list({ limit: 1 })).data;
    expect(next?.amount).toBe(49_275);
    expect((await rowsOf(next?.id ?? '')).map(({ reporting_category }) => reporting_category)).toEqual([
      'payout',
      'payout_reversal',
    ]);
    expect(payoutTypes()).toContain('payout.failed');
  });

  test('cancelled before it left · the money comes back', async () => {
    await payNewSession(bed, CARD, { amount: 50_000 });
    const [payout] = await bed.control.payoutNow({ releasePending: true });
    const canceled = await bed.control.cancelPayout(payout?.id ?? '');
    expect(canceled.status).toBe('canceled');
    expect(await balanceNow()).toEqual([49_275, 0]);
  });

  test('below zero · carried forward, or collected from the bank where switched on', async () => {
    const { charge } = await payNewSession(bed, CARD, { amount: 50_000 });
    await bed.control.advanceClock(3 * DAY_MS);
    await bed.stripe.refunds.create({ charge: charge.id });
    expect(await bed.control.payoutNow()).toEqual([]);
    expect(await balanceNow()).toEqual([-50_000, 0]);
    await bed.control.set({ negativePayouts: true });
    const [collected] = await bed.control.payoutNow();
    expect(collected?.amount).toBe(-50_000);
    expect(netSum(await rowsOf(collected?.id ?? ''))).toBe(0);
    expect(await balanceNow()).toEqual([0, 0]);
  });
});

describe('A payout by hand', () => {
  test('now · takes what is available, and arrives when told', async () => {
    await payNewSession(bed, CARD, { amount: 50_000 });
    expect(await bed.control.payoutNow()).toEqual([]);
    const [payout] = await bed.control.payoutNow({ releasePending: true });
    expect([payout?.status, payout?.amount]).toEqual(['pending', 49_275]);
    expect((await bed.control.arrivePayout(payout?.id ?? '')).status).toBe('paid');
    expect((await bed.stripe.payouts.list({ status: 'paid' })).data).toHaveLength(1);
  });

  test('unknown · 404', async () => {
    await expect(bed.control.failPayout('po_none')).rejects.toThrow('po_none');
    expect((await errorOf(bed.stripe.payouts.retrieve('po_none'))).statusCode).toBe(404);
  });
});

describe('The clock', () => {
  test('weeks of history · every object bears the time at which it came to be', async () => {
    await bed.control.setClock('2026-02-02T10:00:00Z', { frozen: true });
    const { charge } = await payNewSession(bed, CARD);
    expect(charge.created).toBe(seconds('2026-02-02T10:00:00Z'));
    await bed.control.setClock('2026-02-20T12:00:00Z', { frozen: true });
    const payout = await onlyPayout();
    expect([payout.created, payout.arrival_date]).toEqual([
      seconds('2026-02-04T06:00:00Z'),
      seconds('2026-02-05T00:00:00Z'),
    ]);
    const [paid] = (await bed.stripe.events.list({ type: 'payout.paid' })).data;
    expect(paid?.created).toBe(seconds('2026-02-05T08:00:00Z'));
  });

  test('one payout a day · whatever step the clock takes', async () => {
    for (let day = 0; day < 5; day += 1) {
      await payNewSession(bed, CARD, { amount: 10_000 });
      await bed.control.advanceClock(DAY_MS);
    }
    await bed.control.advanceClock(10 * DAY_MS);
    const days = (await bed.stripe.payouts.list()).data.map(({ created }) =>
      new Date(created * 1_000).toISOString(),
    );
    expect(days).toEqual([8, 7, 6, 5, 4].map((day) => `2026-03-0${day}T06:00:00.000Z`));
  });

  test('set without freezing · runs on; reset · the machine’s time', async () => {
    await bed.control.setClock('2026-04-01T00:00:00Z');
    const first = await bed.control.clock();
    expect(first.frozen).toBe(false);
    expect(Date.parse(first.now)).toBeGreaterThanOrEqual(Date.parse('2026-04-01T00:00:00Z'));
    const before = Date.now();
    const { now } = await bed.control.resetClock();
    expect(Date.parse(now)).toBeGreaterThanOrEqual(before);
    expect(Date.parse(now)).toBeLessThanOrEqual(Date.now());
  });

  test('an instant that is none · refused by name', async () => {
    await expect(bed.control.setClock('yesterday')).rejects.toThrow(/^now:/);
  });
});
