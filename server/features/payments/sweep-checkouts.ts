import { addMs } from '#domain/time/index';
import { inTransaction } from '#server/platform/transaction';
import {
  type CheckoutAttempt,
  changeAttempt,
  markChecked,
  unwatchedAttempts,
} from './checkout-repository.ts';
import { applyCheckout, type PaymentDeps, reconcileCheckout } from './reconcile-checkout.ts';
import { storeEvent } from './stored-events.ts';

const QUIET_MS = 60_000;
const BATCH = 20;
/** How long the processor remembers a key; later a repeat would open a second checkout. */
const KEY_LIFE_MS = 24 * 60 * 60 * 1000;
const LOOK_BACK_MS = 60 * 60 * 1000;

/** Finds what a lost answer left behind: asks the processor about every live attempt nobody heard of for a minute. */
export async function sweepCheckouts(deps: PaymentDeps): Promise<number> {
  const attempts = await unwatchedAttempts(deps.db, addMs(deps.clock.now(), -QUIET_MS), BATCH);
  for (const attempt of attempts) {
    try {
      await lookAfter(deps, attempt);
    } catch (error) {
      deps.log.warn(
        { attempt: attempt.checkoutAttemptId, reason: error instanceof Error ? error.name : 'unknown' },
        'sweep will ask again',
      );
      await inTransaction(deps.db, (trx) => markChecked(trx, attempt.attemptKey, deps.clock.now()));
    }
  }
  return attempts.length;
}

async function lookAfter(deps: PaymentDeps, attempt: CheckoutAttempt): Promise<void> {
  if (attempt.sessionId !== null) {
    await reconcileCheckout(deps, attempt.sessionId);
    return;
  }
  const now = deps.clock.now();
  const found = await deps.gateways.stripe.findCheckout(
    attempt.attemptKey,
    addMs(attempt.createdAt, -QUIET_MS),
  );
  if (found) await applyCheckout(deps, await deps.gateways.stripe.fetchCheckout(found.sessionId));
  else if (attempt.expiresAt <= now || addMs(attempt.createdAt, KEY_LIFE_MS) <= now) {
    await inTransaction(deps.db, (trx) =>
      changeAttempt(trx, attempt.attemptKey, { state: 'expired', lastError: 'never_sent' }, now),
    );
  } else await inTransaction(deps.db, (trx) => markChecked(trx, attempt.attemptKey, now));
}

/** Finds events that never arrived: lists the processor's last hour and stores what is missing. Returns how many were new. */
export async function sweepEvents(deps: PaymentDeps): Promise<number> {
  const now = deps.clock.now();
  let missing = 0;
  for (const event of await deps.gateways.stripe.eventsSince(addMs(now, -LOOK_BACK_MS))) {
    if (await storeEvent(deps.db, event, now)) missing += 1;
  }
  return missing;
}
