import { ACCOUNT, receiptEntry } from '#domain/ledger/index';
import { add, greatest, type Minor, minor, subtract, sum, ZERO } from '#domain/money/index';
import type { Tender } from '#domain/payments/index';
import { type ClinicDate, yearOf } from '#domain/time/index';
import { recordAudit } from '#server/features/audit/index';
import { lockOpenDay } from '#server/features/business-days/index';
import { type CourseRow, coursePaid, lockCourse } from '#server/features/courses/index';
import { courseBalance, postEntry, takeNumber } from '#server/features/ledger/index';
import { type Actor, userIdOf } from '#server/platform/actor';
import { insertRow, rawRows, sqlInstant, type Trx } from '#server/platform/db';
import type { Deps } from '#server/platform/deps';
import { hint } from '#server/platform/live-hints';
import { notFound } from '#server/platform/problem';

declare module '#server/platform/facts' {
  interface FactMap {
    'receipt.recorded': {
      readonly receiptId: number;
      readonly number: string;
      readonly courseId: number;
      readonly siteId: number;
      readonly online: boolean;
    };
  }
}

export interface ReceiptTender {
  readonly tender: Tender;
  readonly amountMinor: Minor;
  /** Slip, cheque or transfer reference. */
  readonly reference: string | null;
  /** The processor's charge, for online card payments: a charge posts once (invariant 8). */
  readonly chargeId: string | null;
}

export interface ReceiptInput {
  readonly courseId: number;
  /** null: the patient pays. */
  readonly payerName: string | null;
  readonly tenders: readonly ReceiptTender[];
  readonly changeMinor: number;
  readonly roundingMinor: number;
  readonly occurredOn: ClinicDate;
  readonly till: { readonly tillId: number; readonly tillSessionId: number } | null;
  readonly attemptKey: string;
  readonly actor: Actor;
}

export interface RecordedReceipt {
  readonly receiptId: number;
  readonly number: string;
}

/**
 * The one place money becomes real: the receipt with its tenders, its entry, its audit row and its number, in the
 * caller's transaction. The course is locked first, the number series last of all locks, so that the series has no gaps
 * and nobody waits longer than the inserts take (invariants 4, 5, 6).
 */
export async function recordReceipt(
  trx: Trx,
  deps: Pick<Deps, 'clock' | 'facts'>,
  input: ReceiptInput,
): Promise<RecordedReceipt> {
  const course = await lockCourse(trx, input.courseId);
  if (!course) throw notFound('course');
  const paid = await coursePaid(trx, course.courseId);
  const received = sum(input.tenders.map((tender) => tender.amountMinor));
  const totalMinor = add(subtract(received, minor(input.changeMinor)), minor(input.roundingMinor));
  const leftMinor = greatest(subtract(course.totalMinor, paid.appliedMinor), ZERO);
  const appliedMinor = minor(Math.min(totalMinor, leftMinor));
  const creditMinor = subtract(totalMinor, appliedMinor);
  const receivableMinor = greatest(
    await courseBalance(trx, course.courseId, ACCOUNT.patientReceivable),
    ZERO,
  );
  const payer = input.payerName ?? (await patientName(trx, course.patientId));
  const bookedOn = await lockOpenDay(trx, deps, course.siteId);
  const { number, year, seriesNo } = await nextReceiptNumber(trx, course, bookedOn);
  const receiptId = await insertRow(trx, 'receipts', {
    number,
    site_id: course.siteId,
    series_year: year,
    series_no: seriesNo,
    course_id: course.courseId,
    patient_id: course.patientId,
    payer_name: payer,
    currency: course.currency,
    applied_minor: appliedMinor,
    credit_minor: creditMinor,
    change_minor: input.changeMinor,
    rounding_minor: input.roundingMinor,
    total_minor: totalMinor,
    occurred_on: input.occurredOn,
    booked_on: bookedOn,
    recorded_at: sqlInstant(deps.clock.now()),
    taken_by: userIdOf(input.actor),
    till_session_id: input.till?.tillSessionId ?? null,
    attempt_key: input.attemptKey,
  });
  await insertTenders(trx, receiptId, input.tenders);
  const draft = receiptEntry({
    courseId: course.courseId,
    memo: `Receipt ${number}`,
    currency: course.currency,
    occurredOn: input.occurredOn,
    tenders: input.tenders.map(({ tender, amountMinor }) => ({
      tender,
      amountMinor,
      ...(tender === 'cash' && input.till ? { tillId: input.till.tillId } : {}),
    })),
    changeMinor: minor(input.changeMinor),
    roundingMinor: minor(input.roundingMinor),
    appliedMinor,
    creditMinor,
    receivableMinor,
  });
  await postEntry(trx, deps, {
    siteId: course.siteId,
    source: { type: 'receipt', id: receiptId },
    draft,
    actor: input.actor,
    bookedOn,
  });
  await recordAudit(trx, deps, {
    actor: input.actor,
    action: 'receipt.taken',
    subjectType: 'receipt',
    subjectId: receiptId,
    siteId: course.siteId,
    after: { number, courseId: course.courseId, totalMinor, appliedMinor, creditMinor },
  });
  const online = input.tenders.some((tender) => tender.tender === 'online_card');
  await hint(trx, deps.clock, {
    siteId: course.siteId,
    topic: 'receipts',
    subjectId: receiptId,
    ...(online ? { message: `${payer} paid online` } : {}),
  });
  await deps.facts.publish(trx, 'receipt.recorded', {
    receiptId,
    number,
    courseId: course.courseId,
    siteId: course.siteId,
    online,
  });
  return { receiptId, number };
}

async function insertTenders(trx: Trx, receiptId: number, tenders: readonly ReceiptTender[]): Promise<void> {
  await trx('receipt_tenders').insert(
    tenders.map((tender, index) => ({
      receipt_id: receiptId,
      tender_no: index + 1,
      tender: tender.tender,
      amount_minor: tender.amountMinor,
      reference: tender.reference,
      charge_id: tender.chargeId,
    })),
  );
}

async function nextReceiptNumber(trx: Trx, course: CourseRow, bookedOn: ClinicDate) {
  const [site] = await rawRows<{ code: string }>(trx, 'SELECT code FROM sites WHERE site_id = ?', [
    course.siteId,
  ]);
  const year = yearOf(bookedOn);
  const seriesNo = await takeNumber(trx, course.siteId, year, 'receipt');
  return {
    year,
    seriesNo,
    number: `${site?.code}-${String(year).slice(2)}-${String(seriesNo).padStart(5, '0')}`,
  };
}

async function patientName(trx: Trx, patientId: number): Promise<string> {
  const [row] = await rawRows<{ name: string }>(
    trx,
    `SELECT CONCAT(given_name, ' ', family_name) AS name FROM patients WHERE patient_id = ?`,
    [patientId],
  );
  return row?.name ?? '';
}
