import type { ReceiptView } from '#contract/payments';
import type { CurrencyCode } from '#domain/money/index';
import type { Tender } from '#domain/payments/index';
import type { ClinicDate, Instant } from '#domain/time/index';
import { type Db, rawRows, readMinor, type Trx } from '#server/platform/db';

interface ReceiptRow {
  receipt_id: number;
  number: string;
  site_id: number;
  course_id: number | null;
  course_number: string | null;
  patient_name: string;
  payer_name: string;
  currency: CurrencyCode;
  applied_minor: number;
  credit_minor: number;
  change_minor: number;
  rounding_minor: number;
  total_minor: number;
  occurred_on: ClinicDate;
  booked_on: ClinicDate;
  recorded_at: Instant;
  taken_by: string | null;
  void_reason: string | null;
  voided_by: string | null;
  voided_at: Instant | null;
}

const SELECT = `
  SELECT r.receipt_id, r.number, r.site_id, r.course_id, c.number AS course_number,
         CONCAT(p.given_name, ' ', p.family_name) AS patient_name, r.payer_name, r.currency, r.applied_minor, r.credit_minor,
         r.change_minor, r.rounding_minor, r.total_minor, r.occurred_on, r.booked_on, r.recorded_at, u.name AS taken_by,
         v.reason AS void_reason, vu.name AS voided_by, v.recorded_at AS voided_at
  FROM receipts r
  JOIN patients p ON p.patient_id = r.patient_id
  LEFT JOIN courses c ON c.course_id = r.course_id
  LEFT JOIN users u ON u.user_id = r.taken_by
  LEFT JOIN receipt_voids v ON v.receipt_id = r.receipt_id
  LEFT JOIN users vu ON vu.user_id = v.voided_by`;

async function receiptsWhere(
  trx: Db | Trx,
  where: string,
  bindings: readonly unknown[],
): Promise<ReceiptView[]> {
  const rows = await rawRows<ReceiptRow>(trx, `${SELECT} WHERE ${where}`, bindings);
  if (rows.length === 0) return [];
  const tenders = await rawRows<{
    receipt_id: number;
    tender: Tender;
    amount_minor: number;
    reference: string | null;
  }>(
    trx,
    `SELECT receipt_id, tender, amount_minor, reference FROM receipt_tenders
     WHERE receipt_id IN (${rows.map(() => '?').join(',')}) ORDER BY receipt_id, tender_no`,
    rows.map((row) => row.receipt_id),
  );
  return rows.map((row) =>
    asReceipt(
      row,
      tenders.filter((tender) => tender.receipt_id === row.receipt_id),
    ),
  );
}

function asReceipt(
  row: ReceiptRow,
  tenders: { tender: Tender; amount_minor: number; reference: string | null }[],
): ReceiptView {
  return {
    receiptId: row.receipt_id,
    number: row.number,
    siteId: row.site_id,
    courseId: row.course_id,
    courseNumber: row.course_number,
    patientName: row.patient_name,
    payerName: row.payer_name,
    currency: row.currency,
    totalMinor: readMinor(row.total_minor),
    appliedMinor: readMinor(row.applied_minor),
    creditMinor: readMinor(row.credit_minor),
    changeMinor: readMinor(row.change_minor),
    roundingMinor: readMinor(row.rounding_minor),
    occurredOn: row.occurred_on,
    bookedOn: row.booked_on,
    recordedAt: row.recorded_at,
    takenBy: row.taken_by,
    tenders: tenders.map((t) => ({
      tender: t.tender,
      amountMinor: readMinor(t.amount_minor),
      reference: t.reference,
    })),
    voided:
      row.void_reason !== null && row.voided_at !== null
        ? { reason: row.void_reason, by: row.voided_by ?? '', at: row.voided_at }
        : null,
  };
}

/** One receipt, whoever asks: callers check the site. */
export async function receiptOf(trx: Db | Trx, receiptId: number): Promise<ReceiptView | undefined> {
  return (await receiptsWhere(trx, 'r.receipt_id = ?', [receiptId]))[0];
}

/** The receipt an attempt key has led to. */
export async function receiptByAttempt(trx: Db | Trx, attemptKey: string): Promise<ReceiptView | undefined> {
  return (await receiptsWhere(trx, 'r.attempt_key = ?', [attemptKey]))[0];
}

/** Receipts of a site booked on a day, newest first. */
export async function receiptsOfDay(trx: Db | Trx, siteId: number, day: ClinicDate): Promise<ReceiptView[]> {
  return await receiptsWhere(trx, 'r.site_id = ? AND r.booked_on = ? ORDER BY r.receipt_id DESC', [
    siteId,
    day,
  ]);
}

/** Receipts of a course, oldest first. */
export async function receiptsOfCourse(trx: Db | Trx, courseId: number): Promise<ReceiptView[]> {
  return await receiptsWhere(trx, 'r.course_id = ? ORDER BY r.receipt_id', [courseId]);
}
