import { type Minor, subtract, sum, ZERO } from '#domain/money/index';
import { addMs, type Instant, msOf } from '#domain/time/index';
import { recordAudit } from '#server/features/audit/index';
import { type CourseMoney, type CourseRow, courseMoney, lockCourse } from '#server/features/courses/index';
import { type Checkout, type CheckoutRequest, ProcessorError } from '#server/gateways/index';
import type { Actor } from '#server/platform/actor';
import type { Trx } from '#server/platform/db';
import { conflict, notFound, Problem, refused } from '#server/platform/problem';
import { inTransaction } from '#server/platform/transaction';
import {
  attemptByKey,
  type CheckoutAttempt,
  type CheckoutPurpose,
  changeAttempt,
  insertAttempt,
  liveAttempt,
} from './checkout-repository.ts';
import { applyCheckout, type PaymentDeps } from './reconcile-checkout.ts';

export interface StartCheckoutInput {
  readonly courseId: number;
  readonly purpose: CheckoutPurpose;
  /** Made once by the browser per intent to pay; becomes the idempotency key. */
  readonly attemptKey: string;
  /** Where the hosted page sends the payer back, both after paying and on turning back; `?attempt=` is appended. */
  readonly returnUrl: string;
  readonly email: string | null;
  readonly actor: Actor;
}

const LIFE_MS = 60 * 60 * 1000;
/** How often a course's older checkout may stand in the way before the payer is asked to try again. */
const ROUNDS = 3;

/**
 * Opens the hosted page for what is due, at most one live checkout per course (invariant 7). The attempt is stored before
 * anything is sent, so that a lost answer, a second click or a second browser end at the same checkout.
 * @throws Problem refused 'nothing_due', conflict 'attempt_of_another_course', unavailable when the processor does not answer
 */
export async function startCheckout(deps: PaymentDeps, input: StartCheckoutInput): Promise<CheckoutAttempt> {
  for (let round = 1; round <= ROUNDS; round += 1) {
    const found = await inTransaction(deps.db, (trx) => prepareAttempt(trx, deps, input));
    if (found.inTheWay) await clearTheWay(deps, found.attempt);
    else return await openAttempt(deps, found.attempt);
  }
  throw conflict(
    'checkout_busy',
    'Another payment for this course is just being settled. Please try again in a moment.',
  );
}

interface Prepared {
  readonly attempt: CheckoutAttempt;
  /** A live checkout for another amount or purpose must end before ours begins. */
  readonly inTheWay: boolean;
}

async function prepareAttempt(trx: Trx, deps: PaymentDeps, input: StartCheckoutInput): Promise<Prepared> {
  const course = await lockCourse(trx, input.courseId);
  if (!course) throw notFound('course');
  const same = await attemptByKey(trx, input.attemptKey);
  if (same && same.courseId !== course.courseId) {
    throw conflict('attempt_of_another_course', 'This payment attempt belongs to another course.');
  }
  if (same) return { attempt: same, inTheWay: false };
  const amountMinor = await amountToPay(trx, deps, course, input.purpose);
  const live = await liveAttempt(trx, course.courseId);
  if (live) {
    const reusable =
      live.amountMinor === amountMinor && live.purpose === input.purpose && live.expiresAt > deps.clock.now();
    return { attempt: live, inTheWay: !reusable };
  }
  return { attempt: await storeAttempt(trx, deps, course, amountMinor, input), inTheWay: false };
}

async function amountToPay(
  trx: Trx,
  deps: PaymentDeps,
  course: CourseRow,
  purpose: CheckoutPurpose,
): Promise<Minor> {
  const money = await courseMoney(trx, deps, course.courseId);
  const amount = purpose === 'deposit' ? depositNow(money) : money.leftMinor;
  if (amount <= 0)
    throw refused('nothing_due', 'Nothing is due on this course now; there is nothing to pay.');
  return amount;
}

/** The deposit as far as it is unpaid; once it is paid, whatever else is due today. */
function depositNow(money: CourseMoney): Minor {
  const deposits = money.dues.filter((due) => due.kind === 'deposit');
  const unpaid = deposits.map((due) => {
    const paid = money.paidFor.dues.find((each) => each.dueNo === due.dueNo)?.paidMinor ?? ZERO;
    return subtract(due.amountMinor, paid);
  });
  const left = sum(unpaid);
  return left > 0 ? left : money.dueNowMinor;
}

async function storeAttempt(
  trx: Trx,
  deps: PaymentDeps,
  course: CourseRow,
  amountMinor: Minor,
  input: StartCheckoutInput,
): Promise<CheckoutAttempt> {
  const now = deps.clock.now();
  const expiresAt: Instant = addMs(now, LIFE_MS);
  const joint = input.returnUrl.includes('?') ? '&' : '?';
  const request: CheckoutRequest = {
    attemptKey: input.attemptKey,
    currency: course.currency,
    amountMinor,
    description: `${input.purpose === 'deposit' ? 'Deposit' : 'Balance'}, course ${course.number}`,
    email: input.email,
    successUrl: `${input.returnUrl}${joint}attempt=${input.attemptKey}`,
    cancelUrl: `${input.returnUrl}${joint}attempt=${input.attemptKey}&turned-back=1`,
    expiresAtSeconds: Math.floor(msOf(expiresAt) / 1000),
  };
  await insertAttempt(
    trx,
    { courseId: course.courseId, siteId: course.siteId, purpose: input.purpose, request, expiresAt },
    now,
  );
  await recordAudit(trx, deps, {
    actor: input.actor,
    action: 'checkout.started',
    subjectType: 'course',
    subjectId: course.courseId,
    siteId: course.siteId,
    after: { attemptKey: input.attemptKey, amountMinor, purpose: input.purpose },
  });
  const attempt = await attemptByKey(trx, input.attemptKey);
  if (!attempt) throw new Error('The attempt just stored is not there');
  return attempt;
}

/** Sends what was stored; repeating sends the same bytes under the same key. Only a 'made' attempt needs sending. */
async function openAttempt(deps: PaymentDeps, attempt: CheckoutAttempt): Promise<CheckoutAttempt> {
  if (attempt.state !== 'made') return attempt;
  const checkout = await send(deps, attempt);
  return (await applyCheckout(deps, checkout)) ?? attempt;
}

async function send(deps: PaymentDeps, attempt: CheckoutAttempt): Promise<Checkout> {
  try {
    return await deps.gateways.stripe.openCheckout(attempt.request);
  } catch (error) {
    if (!(error instanceof ProcessorError)) throw error;
    if (error.kind === 'unsure') {
      throw new Problem('unavailable', {
        reason: 'processor_silent',
        detail: 'The card page does not answer just now. Nothing was charged; please try again in a moment.',
        retryAfter: 5,
      });
    }
    await inTransaction(deps.db, (trx) =>
      changeAttempt(trx, attempt.attemptKey, { state: 'failed', lastError: error.code }, deps.clock.now()),
    );
    throw refused(
      'processor_refused',
      'The card page could not be opened for this amount. Nothing was charged; please pay at the desk or call us.',
    );
  }
}

/** Ends an older live checkout: expired, or found paid meanwhile, in which case the payment is recorded. */
async function clearTheWay(deps: PaymentDeps, attempt: CheckoutAttempt): Promise<void> {
  const opened = attempt.sessionId === null ? await openAttempt(deps, attempt) : attempt;
  if (opened.sessionId === null || opened.state !== 'open') return;
  await applyCheckout(deps, await deps.gateways.stripe.expireCheckout(opened.sessionId));
}
