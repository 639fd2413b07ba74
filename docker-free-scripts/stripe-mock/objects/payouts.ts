import { refused } from '#stand-ins/stripe-mock/api/errors';
import { DAY_MS, HOUR_MS, SECOND_MS } from '#stand-ins/stripe-mock/clock/clock';
import { schedule, unschedule } from '#stand-ins/stripe-mock/clock/tasks';
import { present } from '#stand-ins/stripe-mock/serialise/present';
import type { Service } from '#stand-ins/stripe-mock/service';
import { settingsOf, stamp } from '#stand-ins/stripe-mock/service';
import { newId } from '#stand-ins/stripe-mock/state/ids';
import type { BalanceTransactionRecord, PayoutRecord } from '#stand-ins/stripe-mock/state/records';
import { emit } from '#stand-ins/stripe-mock/webhooks/events';
import { book, netOf } from './balance.ts';
import { settleRefundsInWait } from './refunds.ts';

/** Payouts are made at six in the morning UTC, leave an hour later and are in the bank the next day. */
const MADE_AT_MS = 6 * HOUR_MS;
const LEAVES_AFTER_MS = HOUR_MS;
const ARRIVES_AT_MS = 8 * HOUR_MS;

/** Puts the next daily run on the queue, in place of any other. */
export function planDailyPayout(service: Service): void {
  unschedule(service, 'daily_payout', '');
  const nowMs = service.clock.nowMs();
  const today = startOfDay(nowMs) + MADE_AT_MS;
  schedule(service, 'daily_payout', '', today > nowMs ? today : today + DAY_MS);
}

export function runDailyPayout(service: Service): void {
  settleRefundsInWait(service);
  payOut(service);
  planDailyPayout(service);
}

/**
 * Makes one payout per currency of all that is available and in no payout yet, with a row of its own that brings
 * the sum of its rows to zero. A sum below zero is collected from the bank where the settings say so.
 */
export function payOut(service: Service): PayoutRecord[] {
  const now = service.clock.nowSeconds();
  const open = service.store
    .all('balanceTransactions')
    .filter((row) => row.payoutId === null && row.availableOn <= now);
  const currencies = new Set(open.map((row) => row.currency));
  const { negativePayouts } = settingsOf(service);
  return [...currencies].flatMap((currency) => {
    const rows = open.filter((row) => row.currency === currency);
    const amount = rows.reduce((sum, row) => sum + netOf(row), 0);
    return amount > 0 || (amount < 0 && negativePayouts) ? [makePayout(service, currency, amount, rows)] : [];
  });
}

function makePayout(
  service: Service,
  currency: string,
  amount: number,
  rows: readonly BalanceTransactionRecord[],
): PayoutRecord {
  const created = stamp(service, newId('po'));
  const nextDayMs = startOfDay(service.clock.nowMs()) + DAY_MS;
  for (const row of rows) service.store.put('balanceTransactions', { ...row, payoutId: created.id });
  const own = book(service, {
    type: 'payout',
    reportingCategory: 'payout',
    amount: -amount,
    currency,
    source: created.id,
    payoutId: created.id,
    description: 'Daily payout',
  });
  const payout = service.store.put('payouts', {
    ...created,
    status: 'pending',
    amount,
    currency,
    arrivalDate: nextDayMs / SECOND_MS,
    reconciled: false,
    balanceTransaction: own.id,
    failureBalanceTransaction: null,
    failure: null,
  });
  schedule(service, 'payout_on_its_way', payout.id, service.clock.nowMs() + LEAVES_AFTER_MS);
  schedule(service, 'payout_arrives', payout.id, nextDayMs + ARRIVES_AT_MS);
  emit(service, 'payout.created', 'payouts', payout);
  return payout;
}

export function sendOnItsWay(service: Service, payoutId: string): void {
  const payout = service.store.get('payouts', payoutId);
  if (payout.status !== 'pending') return;
  const before = present(service, 'payouts', payout);
  const leaving = service.store.put('payouts', { ...payout, status: 'in_transit', reconciled: true });
  emit(service, 'payout.updated', 'payouts', leaving, before);
  emit(service, 'payout.reconciliation_completed', 'payouts', leaving);
}

export function arrive(service: Service, payoutId: string): void {
  const payout = service.store.get('payouts', payoutId);
  if (payout.status !== 'in_transit') return;
  const paid = service.store.put('payouts', { ...payout, status: 'paid' });
  emit(service, 'payout.paid', 'payouts', paid);
}

/**
 * The bank sends a payout back, even one it had taken: the money returns to the balance by a row of its own,
 * which the next payout carries; the failed payout keeps its rows.
 */
export function failPayout(service: Service, payout: PayoutRecord): PayoutRecord {
  if (payout.status !== 'in_transit' && payout.status !== 'paid') {
    throw refused(`A payout that is ${payout.status} cannot fail.`);
  }
  const row = returnMoney(service, payout, 'payout_failure');
  const failed = service.store.put('payouts', {
    ...payout,
    status: 'failed',
    failureBalanceTransaction: row.id,
    failure: { code: 'account_closed', message: 'The bank account has been closed.' },
  });
  emit(service, 'payout.failed', 'payouts', failed);
  return failed;
}

/** Takes back a payout that has not left yet. */
export function cancelPayout(service: Service, payout: PayoutRecord): PayoutRecord {
  if (payout.status !== 'pending') throw refused(`A payout that is ${payout.status} cannot be canceled.`);
  const row = returnMoney(service, payout, 'payout_cancel');
  const canceled = service.store.put('payouts', {
    ...payout,
    status: 'canceled',
    failureBalanceTransaction: row.id,
  });
  emit(service, 'payout.canceled', 'payouts', canceled);
  return canceled;
}

function returnMoney(service: Service, payout: PayoutRecord, type: 'payout_failure' | 'payout_cancel') {
  return book(service, {
    type,
    reportingCategory: 'payout_reversal',
    amount: payout.amount,
    currency: payout.currency,
    source: payout.id,
    description: 'A payout came back',
  });
}

function startOfDay(ms: number): number {
  return ms - (ms % DAY_MS);
}
