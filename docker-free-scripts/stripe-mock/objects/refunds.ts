import { noSuch, refused } from '#stand-ins/stripe-mock/api/errors';
import { DAY_MS, HOUR_MS } from '#stand-ins/stripe-mock/clock/clock';
import { schedule, unschedule } from '#stand-ins/stripe-mock/clock/tasks';
import { present } from '#stand-ins/stripe-mock/serialise/present';
import type { Service } from '#stand-ins/stripe-mock/service';
import { settingsOf, stamp } from '#stand-ins/stripe-mock/service';
import { newId } from '#stand-ins/stripe-mock/state/ids';
import type { ChargeRecord, Metadata, RefundRecord } from '#stand-ins/stripe-mock/state/records';
import { emit } from '#stand-ins/stripe-mock/webhooks/events';
import { availableBalance, book } from './balance.ts';
import { readableAmount } from './currencies.ts';
import { refundedOf } from './refund-sums.ts';

/** How long a refund to the "pending" test card takes, and when one to the "fails later" card comes back. */
const SETTLES_AFTER_MS = HOUR_MS;
const FAILS_AFTER_MS = 2 * DAY_MS;

export interface RefundRequest {
  readonly charge: string | null;
  readonly paymentIntent: string | null;
  /** Minor units; everything left when null. */
  readonly amount: number | null;
  readonly reason: RefundRecord['reason'];
  readonly metadata: Metadata;
}

/** @throws ApiError when the charge is unknown, unpaid, disputed, refunded already, or the amount too large */
export function createRefund(service: Service, request: RefundRequest): RefundRecord {
  const charge = chargeToRefund(service, request);
  const left = charge.amount - refundedOf(service, charge.id);
  refuseDisputed(service, charge, request);
  if (left === 0) {
    throw refused(`Charge ${charge.id} has already been refunded.`, { code: 'charge_already_refunded' });
  }
  const amount = request.amount ?? left;
  if (amount > left) {
    throw refused(
      `Refund amount (${readableAmount(amount, charge.currency)}) is greater than unrefunded amount on charge (${readableAmount(left, charge.currency)})`,
      { param: 'amount' },
    );
  }
  const before = present(service, 'charges', charge);
  const refund = begin(service, charge, request, amount);
  emit(service, 'refund.created', 'refunds', refund);
  emit(service, 'charge.refunded', 'charges', charge, before);
  return refund;
}

function chargeToRefund(service: Service, request: RefundRequest): ChargeRecord {
  if (request.paymentIntent !== null) {
    const intent = service.store.find('intents', request.paymentIntent);
    if (intent === undefined) throw noSuch('payment_intent', request.paymentIntent, 'payment_intent');
    if (intent.status !== 'succeeded' || intent.latestCharge === null) {
      throw refused(`This PaymentIntent (${intent.id}) does not have a successful charge to refund.`, {
        param: 'payment_intent',
      });
    }
    return service.store.get('charges', intent.latestCharge);
  }
  const charge = service.store.find('charges', request.charge);
  if (charge === undefined) throw noSuch('charge', request.charge ?? '', 'charge');
  if (charge.status !== 'succeeded')
    throw refused('You cannot refund a charge that was not paid.', { param: 'charge' });
  return charge;
}

/** Which of the two published codes comes when is from memory: by payment intent the second. */
function refuseDisputed(service: Service, charge: ChargeRecord, request: RefundRequest): void {
  const blocking = service.store
    .all('disputes')
    .some((dispute) => dispute.chargeId === charge.id && !dispute.inquiry && dispute.status !== 'won');
  if (!blocking) return;
  throw refused(`Charge ${charge.id} has been charged back; cannot issue a refund.`, {
    code: request.paymentIntent === null ? 'charge_disputed' : 'refund_disputed_payment',
  });
}

function begin(service: Service, charge: ChargeRecord, request: RefundRequest, amount: number): RefundRecord {
  const { behaviour } = service.store.get('cards', charge.cardId);
  const short = settingsOf(service).shortBalance && amount > availableBalance(service, charge.currency);
  const pendingReason = short ? 'insufficient_funds' : behaviour === 'refund_pending' ? 'processing' : null;
  const refund: RefundRecord = {
    ...stamp(service, newId('re')),
    status: pendingReason === null ? 'succeeded' : 'pending',
    amount,
    currency: charge.currency,
    chargeId: charge.id,
    intentId: charge.intentId,
    reason: request.reason,
    metadata: request.metadata,
    pendingReason,
    balanceTransaction: null,
    failureBalanceTransaction: null,
    failureReason: null,
  };
  const nowMs = service.clock.nowMs();
  if (pendingReason === 'processing') schedule(service, 'settle_refund', refund.id, nowMs + SETTLES_AFTER_MS);
  if (behaviour === 'refund_fails_later') schedule(service, 'fail_refund', refund.id, nowMs + FAILS_AFTER_MS);
  // Money that is not there cannot leave: the row is booked once the balance suffices.
  return short ? service.store.put('refunds', refund) : withdraw(service, refund);
}

function withdraw(service: Service, refund: RefundRecord): RefundRecord {
  const row = book(service, {
    type: 'refund',
    reportingCategory: 'refund',
    amount: -refund.amount,
    currency: refund.currency,
    source: refund.id,
    description: 'Refund of a charge; the fee of the charge does not come back',
  });
  return service.store.put('refunds', { ...refund, balanceTransaction: row.id });
}

/** A pending refund reaches the payer; with anything else nothing happens. */
export function settleRefund(service: Service, refund: RefundRecord): RefundRecord {
  if (refund.status !== 'pending' && refund.status !== 'requires_action') return refund;
  return change(service, refund, 'succeeded', []);
}

/** Pays out pending refunds, the oldest first, as far as the available balance now reaches. */
export function settleRefundsInWait(service: Service): void {
  for (const refund of service.store.all('refunds')) {
    if (refund.status !== 'pending' || refund.pendingReason !== 'insufficient_funds') continue;
    if (refund.amount > availableBalance(service, refund.currency)) break;
    settleRefund(service, refund);
  }
}

/** The money comes back to the balance; also from a refund that had succeeded. */
export function failRefund(service: Service, refund: RefundRecord): RefundRecord {
  if (refund.status === 'failed' || refund.status === 'canceled') return refund;
  return change(service, refund, 'failed', ['refund.failed']);
}

/** The payer must act first, as with ways to pay that know no refund of their own. */
export function requireRefundAction(service: Service, refund: RefundRecord): RefundRecord {
  if (refund.status !== 'pending') return refund;
  return change(service, refund, 'requires_action', []);
}

/** @throws ApiError unless the refund waits for the payer to act */
export function cancelRefund(service: Service, refund: RefundRecord): RefundRecord {
  if (refund.status !== 'requires_action') {
    throw refused(
      `You can only cancel a refund with status requires_action; ${refund.id} is ${refund.status}.`,
    );
  }
  return change(service, refund, 'canceled', []);
}

function change(
  service: Service,
  refund: RefundRecord,
  status: RefundRecord['status'],
  moreEvents: readonly string[],
): RefundRecord {
  const before = present(service, 'refunds', refund);
  unschedule(service, 'settle_refund', refund.id);
  if (status === 'failed' || status === 'canceled') unschedule(service, 'fail_refund', refund.id);
  const unbooked = refund.balanceTransaction === null && status === 'succeeded';
  const booked = unbooked ? withdraw(service, refund) : refund;
  const returned = status === 'failed' || status === 'canceled' ? giveBack(service, booked) : booked;
  const after = service.store.put('refunds', {
    ...returned,
    status,
    pendingReason: null,
    failureReason: status === 'failed' ? 'expired_or_canceled_card' : null,
  });
  for (const type of ['refund.updated', 'charge.refund.updated', ...moreEvents]) {
    emit(service, type, 'refunds', after, before);
  }
  return after;
}

function giveBack(service: Service, refund: RefundRecord): RefundRecord {
  if (refund.balanceTransaction === null) return refund;
  const row = book(service, {
    type: 'refund_failure',
    reportingCategory: 'refund_failure',
    amount: refund.amount,
    currency: refund.currency,
    source: refund.id,
    description: 'A refund came back',
  });
  return { ...refund, failureBalanceTransaction: row.id };
}
