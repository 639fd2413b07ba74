import type { ReceiptView } from '#contract/payments';
import { type Minor, minor, subtract } from '#domain/money/index';
import { cashStepOf, type PaymentTaken, type Tender, takePayment } from '#domain/payments/index';
import { todayAt } from '#server/features/business-days/index';
import { coursePaid, lockCourse } from '#server/features/courses/index';
import { mustWorkAt, type StaffActor } from '#server/platform/actor';
import type { Trx } from '#server/platform/db';
import type { Deps } from '#server/platform/deps';
import { conflict, notFound, Problem, refused } from '#server/platform/problem';
import { inTransaction } from '#server/platform/transaction';
import { type OpenTill, openTillFor } from './open-till.ts';
import { receiptByAttempt, receiptOf } from './receipts-read.ts';
import { recordReceipt } from './record-receipt.ts';

export interface DeskPayment {
  readonly courseId: number;
  readonly attemptKey: string;
  readonly payerName: string;
  readonly tenders: readonly {
    readonly tender: Tender;
    readonly amountMinor: Minor;
    readonly reference?: string | undefined;
  }[];
  readonly actor: StaffActor;
}

/**
 * Takes a payment at the desk over one or more tenders, with change and credit. The attempt key makes a second click
 * answer with the first receipt.
 * @throws Problem not_found, refused 'till_not_open', invalid_input naming the tender, conflict 'attempt_of_another_course'
 */
export async function takeDeskPayment(deps: Deps, payment: DeskPayment): Promise<ReceiptView> {
  return await inTransaction(deps.db, async (trx) => {
    const course = await lockCourse(trx, payment.courseId);
    if (!course) throw notFound('course');
    mustWorkAt(payment.actor, course.siteId, 'course');
    const before = await receiptByAttempt(trx, payment.attemptKey);
    if (before && before.courseId !== course.courseId) {
      throw conflict('attempt_of_another_course', 'This payment attempt belongs to another course.');
    }
    if (before) return before;
    const paid = await coursePaid(trx, course.courseId);
    const taken = takePayment({
      tenders: payment.tenders,
      leftMinor: subtract(course.totalMinor, paid.appliedMinor),
      cashStepMinor: cashStepOf(course.currency),
    });
    if (!taken.ok) throw refusedTenders(taken);
    const till = await tillForCash(trx, payment, course.siteId);
    const { receiptId } = await recordReceipt(trx, deps, {
      courseId: course.courseId,
      payerName: payment.payerName,
      tenders: payment.tenders.map((given) => ({
        tender: given.tender,
        amountMinor: minor(given.amountMinor),
        reference: given.reference ?? null,
        chargeId: null,
      })),
      changeMinor: taken.changeMinor,
      roundingMinor: taken.roundingMinor,
      occurredOn: await todayAt(trx, deps, course.siteId),
      till,
      attemptKey: payment.attemptKey,
      actor: payment.actor,
    });
    const receipt = await receiptOf(trx, receiptId);
    if (!receipt) throw new Error('The receipt just recorded is not there');
    return receipt;
  });
}

async function tillForCash(trx: Trx, payment: DeskPayment, siteId: number): Promise<OpenTill | null> {
  if (!payment.tenders.some((given) => given.tender === 'cash')) return null;
  const till = await openTillFor(trx, siteId, payment.actor.userId);
  if (!till) {
    throw refused(
      'till_not_open',
      'Cash needs an open till. Open yours under Takings, then take the payment; nothing was recorded.',
      'tenders',
    );
  }
  return till;
}

function refusedTenders(taken: Extract<PaymentTaken, { ok: false }>): Problem {
  return new Problem('invalid_input', {
    detail: `${taken.refusals.map((refusal) => refusal.words).join(' ')} Nothing was recorded.`,
    fields: taken.refusals.map(({ field, words }) => ({ field, message: words })),
  });
}
