import type { Eye } from '#domain/eye';
import { add, type Minor, negate, sum } from '#domain/money/index';
import { ACCOUNT } from './chart.ts';
import { type BookedTender, fromCourse, move, TENDER_ACCOUNT } from './entries-of-receipts.ts';
import { draft, type EntryDraft, type EntryHeader } from './entry.ts';

/** What a course's entry needs to know of the course's books. */
export interface OfCourse extends EntryHeader {
  readonly courseId: number;
  /** Credit balance of 2000 for this course. */
  readonly liabilityMinor: Minor;
}

/** One promise kept. */
export interface DeliveryToBook extends OfCourse {
  readonly obligationId: number;
  /** Named where the promise belongs to one eye. */
  readonly eye?: Eye;
  /** 4000, 4010, 4020, 4030, 4060 or 4070, as the obligation was allocated. */
  readonly incomeAccount: string;
  /** Allocated amount without tax. */
  readonly amountMinor: Minor;
  /** Tax that falls due with the delivery; zero where exempt or split off before. */
  readonly taxMinor: Minor;
}

/**
 * An eye done, a visit held, an enhancement, goods handed over: Dr 2000 as far as the course has it, the rest 1130;
 * Cr the income, Cr 2200 the tax (invariant 11: only on delivery).
 */
export function deliveryEntry(what: DeliveryToBook): EntryDraft {
  return draft('delivery', what, deliveryLines(what, what.incomeAccount));
}

/** A promise that can no longer be called on, such as cover that ran out: Dr 2000 (1130) Cr 4040. */
export function optionExpiredEntry(what: Omit<DeliveryToBook, 'incomeAccount'>): EntryDraft {
  return draft('option_expired', what, deliveryLines(what, ACCOUNT.expiredOptions));
}

function deliveryLines(what: Omit<DeliveryToBook, 'incomeAccount'>, incomeAccount: string) {
  const { courseId, obligationId, amountMinor, taxMinor, liabilityMinor, eye } = what;
  return [
    ...fromCourse(courseId, add(amountMinor, taxMinor), liabilityMinor),
    {
      account: incomeAccount,
      amountMinor: negate(amountMinor),
      courseId,
      obligationId,
      ...(eye ? { eye } : {}),
    },
    { account: ACCOUNT.outputTax, amountMinor: negate(taxMinor), courseId },
  ];
}

/**
 * Tax that falls due apart from a delivery, such as on a payment in advance or by a change of rate:
 * Dr 2000 (1130) Cr 2200. Below zero when tax comes back to the course: Dr 2200 Cr 2000.
 */
export function taxEntry(what: OfCourse & { readonly taxMinor: Minor }): EntryDraft {
  const { courseId, taxMinor, liabilityMinor } = what;
  const course =
    taxMinor >= 0
      ? fromCourse(courseId, taxMinor, liabilityMinor)
      : [{ account: ACCOUNT.contractLiability, amountMinor: taxMinor, courseId }];
  return draft('tax', what, [
    ...course,
    { account: ACCOUNT.outputTax, amountMinor: negate(taxMinor), courseId },
  ]);
}

/** A cancellation that keeps a part and sends back a part: Dr 2000 (1130) Cr 4050, 2010, and 2200 for tax on what is kept. */
export function cancellationEntry(
  what: OfCourse & {
    /** Without tax. */
    readonly keptMinor: Minor;
    readonly taxMinor: Minor;
    readonly refundMinor: Minor;
  },
): EntryDraft {
  const { courseId, keptMinor, taxMinor, refundMinor, liabilityMinor } = what;
  return draft('cancellation', what, [
    ...fromCourse(courseId, sum([keptMinor, taxMinor, refundMinor]), liabilityMinor),
    { account: ACCOUNT.cancellationIncome, amountMinor: negate(keptMinor), courseId },
    { account: ACCOUNT.outputTax, amountMinor: negate(taxMinor), courseId },
    { account: ACCOUNT.refundsPayable, amountMinor: negate(refundMinor), courseId },
  ]);
}

/** A refund ordered without a cancellation, from the course or from credit on account: Dr 2000 (1130), 2020 Cr 2010. */
export function refundOrderedEntry(
  what: EntryHeader & {
    readonly courseId: number | null;
    readonly liabilityMinor: Minor;
    readonly fromCourseMinor: Minor;
    readonly fromCreditMinor: Minor;
  },
): EntryDraft {
  const { courseId, liabilityMinor, fromCourseMinor, fromCreditMinor } = what;
  const course = courseId === null ? {} : { courseId };
  return draft('refund_ordered', what, [
    ...(courseId === null
      ? [{ account: ACCOUNT.contractLiability, amountMinor: fromCourseMinor }]
      : fromCourse(courseId, fromCourseMinor, liabilityMinor)),
    { account: ACCOUNT.unappliedCredit, amountMinor: fromCreditMinor, ...course },
    {
      account: ACCOUNT.refundsPayable,
      amountMinor: negate(add(fromCourseMinor, fromCreditMinor)),
      ...course,
    },
  ]);
}

/** A refund leaves by the tender it goes back to: Dr 2010 Cr the tender's account. One that fails later is reversed. */
export function refundExecutedEntry(
  what: EntryHeader & BookedTender & { readonly courseId: number | null },
): EntryDraft {
  const { courseId, amountMinor, tender, tillId } = what;
  const course = courseId === null ? {} : { courseId };
  return draft('refund_executed', what, [
    { account: ACCOUNT.refundsPayable, amountMinor, ...course },
    {
      account: TENDER_ACCOUNT[tender],
      amountMinor: negate(amountMinor),
      ...(tillId === undefined ? {} : { tillId }),
      ...(tender === 'credit' ? course : {}),
    },
  ]);
}

/** The processor takes a disputed payment back for the time being, and its fee: Dr 1140, 5120 Cr 1100. */
export function disputeOpenedEntry(
  what: EntryHeader & { readonly amountMinor: Minor; readonly feeMinor: Minor },
): EntryDraft {
  const { amountMinor, feeMinor } = what;
  return draft('dispute_opened', what, [
    { account: ACCOUNT.disputes, amountMinor },
    { account: ACCOUNT.disputeFees, amountMinor: feeMinor },
    { account: ACCOUNT.onlineClearing, amountMinor: negate(add(amountMinor, feeMinor)) },
  ]);
}

/** A dispute won, the money comes back without the fee: Dr 1100 Cr 1140. */
export function disputeWonEntry(what: EntryHeader & { readonly amountMinor: Minor }): EntryDraft {
  return draft('dispute_won', what, move(ACCOUNT.onlineClearing, ACCOUNT.disputes, what.amountMinor));
}

/** A dispute lost: Dr 2000 for what was not yet performed, Dr 1130 for what was, Cr 1140. */
export function disputeLostEntry(what: OfCourse & { readonly amountMinor: Minor }): EntryDraft {
  const { courseId, amountMinor, liabilityMinor } = what;
  return draft('dispute_lost', what, [
    ...fromCourse(courseId, amountMinor, liabilityMinor),
    { account: ACCOUNT.disputes, amountMinor: negate(amountMinor) },
  ]);
}

/** What a patient owes and will not pay, such as performed work behind a lost dispute: Dr 5140 Cr 1130. */
export function impairmentEntry(
  what: EntryHeader & { readonly courseId: number; readonly amountMinor: Minor },
): EntryDraft {
  const { courseId, amountMinor } = what;
  return draft('impairment', what, [
    { account: ACCOUNT.impairment, amountMinor, courseId },
    { account: ACCOUNT.patientReceivable, amountMinor: negate(amountMinor), courseId },
  ]);
}
