import { dayOf } from '#domain/time/index';
import { zoneOf } from '#server/features/business-days/index';
import { lockCourse } from '#server/features/courses/index';
import type { Checkout, StripeGateway } from '#server/gateways/index';
import { SYSTEM } from '#server/platform/actor';
import type { Trx } from '#server/platform/db';
import type { Deps } from '#server/platform/deps';
import { BrokenInvariant } from '#server/platform/problem';
import { inTransaction } from '#server/platform/transaction';
import {
  attemptOfCheckout,
  type CheckoutAttempt,
  changeAttempt,
  lockAttempt,
  markChecked,
} from './checkout-repository.ts';
import { recordReceipt } from './record-receipt.ts';

export type PaymentDeps = Deps & { readonly gateways: { readonly stripe: StripeGateway } };

/**
 * Brings our books to what the processor says of a checkout, fetched anew. Safe to call from the return page, from an
 * event and from the sweep, in any order and any number of times (invariant 8).
 * @returns the attempt as it now stands; undefined when the checkout is none of ours
 */
export async function reconcileCheckout(
  deps: PaymentDeps,
  sessionId: string,
): Promise<CheckoutAttempt | undefined> {
  return await applyCheckout(deps, await deps.gateways.stripe.fetchCheckout(sessionId));
}

/** The same for a checkout that was just fetched or expired. */
export async function applyCheckout(
  deps: PaymentDeps,
  checkout: Checkout,
): Promise<CheckoutAttempt | undefined> {
  const known = await attemptOfCheckout(deps.db, checkout);
  if (!known) return undefined;
  return await inTransaction(deps.db, async (trx) => {
    // Course before attempt, as everywhere: one order of locks, no deadlock.
    if (!(await lockCourse(trx, known.courseId)))
      throw new BrokenInvariant(`Attempt ${known.attemptKey} without course`);
    const attempt = await lockAttempt(trx, known.attemptKey);
    if (!attempt) throw new BrokenInvariant(`Attempt ${known.attemptKey} vanished`);
    await settle(trx, deps, attempt, checkout);
    await markChecked(trx, attempt.attemptKey, deps.clock.now());
    return await lockAttempt(trx, attempt.attemptKey);
  });
}

async function settle(
  trx: Trx,
  deps: PaymentDeps,
  attempt: CheckoutAttempt,
  checkout: Checkout,
): Promise<void> {
  if (attempt.state === 'paid' || attempt.state === 'quarantined') return;
  const now = deps.clock.now();
  if (checkout.paid) {
    if (checkout.amountMinor !== attempt.amountMinor || checkout.currency !== attempt.currency) {
      deps.log.error({ attempt: attempt.checkoutAttemptId }, 'a paid checkout does not match its attempt');
      await changeAttempt(
        trx,
        attempt.attemptKey,
        { state: 'quarantined', checkout, lastError: 'amount_mismatch' },
        now,
      );
      return;
    }
    await recordPaid(trx, deps, attempt, checkout);
  } else if (checkout.status === 'expired') {
    if (attempt.state !== 'expired')
      await changeAttempt(trx, attempt.attemptKey, { state: 'expired', checkout }, now);
  } else if (attempt.state === 'made') {
    await changeAttempt(trx, attempt.attemptKey, { state: 'open', checkout }, now);
  }
}

/** The one transaction in which an online payment becomes real. */
async function recordPaid(
  trx: Trx,
  deps: PaymentDeps,
  attempt: CheckoutAttempt,
  checkout: Checkout,
): Promise<void> {
  const zone = await zoneOf(trx, attempt.siteId);
  const receipt = await recordReceipt(trx, deps, {
    courseId: attempt.courseId,
    payerName: null,
    tenders: [
      {
        tender: 'online_card',
        amountMinor: attempt.amountMinor,
        reference: null,
        chargeId: checkout.chargeId ?? checkout.paymentIntentId,
      },
    ],
    changeMinor: 0,
    roundingMinor: 0,
    occurredOn: dayOf(deps.clock.now(), zone),
    till: null,
    attemptKey: attempt.attemptKey,
    actor: SYSTEM,
  });
  await changeAttempt(
    trx,
    attempt.attemptKey,
    { state: 'paid', checkout, receiptId: receipt.receiptId },
    deps.clock.now(),
  );
}
