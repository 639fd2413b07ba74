import type { DayView } from '#contract/closing';
import { type Minor, minor } from '#domain/money/index';
import { TENDER_LABEL } from '#domain/payments/index';
import type { QuoteContent } from '#domain/quotes/index';
import type { ClinicDate, Instant } from '#domain/time/index';
import { receiptOf } from '#server/features/payments/index';
import { type Db, rawRows, readMinor } from '#server/platform/db';
import { notFound } from '#server/platform/problem';
import type { DocumentMaker, DocumentMakers } from './document-for.ts';
import { renderDayClose } from './render/day-close.ts';
import { renderQuote } from './render/quote.ts';
import { type ReceiptModel, renderReceipt } from './render/receipt.ts';

/** The makers of every kind of document, each from stored rows alone. */
export function documentMakers(): DocumentMakers {
  return { receipt: makeReceipt, quote: makeQuote, day_close: makeDayClose };
}

const makeReceipt: DocumentMaker = async ({ db }, receiptId) => {
  const model = await receiptModel(db, receiptId);
  return {
    filename: `receipt-${model.number}.pdf`,
    siteId: model.siteId,
    subjectType: 'receipt',
    bytes: await renderReceipt(model),
  };
};

/** What a receipt's paper shows. Throws not_found when there is no such receipt. */
export async function receiptModel(
  db: Db,
  receiptId: number,
): Promise<ReceiptModel & { readonly siteId: number }> {
  const receipt = await receiptOf(db, receiptId);
  if (!receipt) throw notFound('receipt');
  const clinic = await clinicAt(db, receipt.siteId);
  return {
    clinic,
    siteId: receipt.siteId,
    number: receipt.number,
    occurredOn: receipt.occurredOn,
    recordedAt: receipt.recordedAt,
    payerName: receipt.payerName,
    patientName: receipt.patientName,
    courseNumber: receipt.courseNumber,
    currency: receipt.currency,
    tenders: receipt.tenders.map((tender) => ({
      words: TENDER_LABEL[tender.tender],
      amountMinor: tender.amountMinor,
      reference: tender.reference,
    })),
    changeMinor: receipt.changeMinor,
    roundingMinor: receipt.roundingMinor,
    totalMinor: receipt.totalMinor,
    creditMinor: receipt.creditMinor,
    leftMinor: receipt.courseId === null ? null : await leftAfter(db, receipt.courseId, receiptId),
    takenBy: receipt.takenBy,
    voided: receipt.voided !== null,
  };
}

/** What was left of a course's price once a receipt was in: later receipts do not change what its paper says. */
async function leftAfter(db: Db, courseId: number, receiptId: number): Promise<Minor> {
  const [row] = await rawRows<{ total_minor: number; paid: unknown }>(
    db,
    `SELECT c.total_minor, (SELECT SUM(r.applied_minor) FROM receipts r LEFT JOIN receipt_voids v ON v.receipt_id = r.receipt_id
       WHERE r.course_id = c.course_id AND r.receipt_id <= ? AND v.receipt_id IS NULL) AS paid
     FROM courses c WHERE c.course_id = ?`,
    [receiptId, courseId],
  );
  return minor(readMinor(row?.total_minor) - readMinor(row?.paid));
}

/** The clinic as it stands at the head of a site's papers. */
export async function clinicAt(
  db: Db,
  siteId: number,
): Promise<{ readonly name: string; readonly address: string }> {
  const [row] = await rawRows<{ name: string; address: string }>(
    db,
    'SELECT k.name, s.address FROM sites s JOIN clinics k ON k.clinic_id = s.clinic_id WHERE s.site_id = ?',
    [siteId],
  );
  return row ?? { name: '', address: '' };
}

const makeQuote: DocumentMaker = async ({ db }, quoteVersionId) => {
  const [row] = await rawRows<{
    number: string;
    site_id: number;
    version_no: number;
    content: string;
    issued_on: ClinicDate;
    issued_at: Instant;
    valid_until: ClinicDate;
  }>(
    db,
    `SELECT q.number, q.site_id, v.version_no, v.content, v.issued_on, v.issued_at, v.valid_until
     FROM quote_versions v JOIN quotes q ON q.quote_id = v.quote_id WHERE v.quote_version_id = ?`,
    [quoteVersionId],
  );
  if (!row) throw notFound('quote');
  const content = JSON.parse(row.content) as QuoteContent;
  const bytes = await renderQuote({
    clinic: await clinicAt(db, row.site_id),
    number: row.number,
    versionNo: row.version_no,
    patientName: `${content.patient.givenName} ${content.patient.familyName}`,
    surgeonName: content.surgeonName,
    issuedOn: row.issued_on,
    issuedAt: row.issued_at,
    validUntil: row.valid_until,
    options: content.options.map(({ label, priced }) => ({ label, priced })),
  });
  return { filename: `quote-${row.number}.pdf`, siteId: row.site_id, subjectType: 'quote_version', bytes };
};

const makeDayClose: DocumentMaker = async ({ db }, dayCloseId) => {
  const [row] = await rawRows<{
    site_id: number;
    zone: string;
    day_on: ClinicDate;
    version_no: number;
    content: string;
    chain_head: Buffer | null;
    asked: string;
    closed: string;
    closed_at: Instant;
  }>(
    db,
    `SELECT d.site_id, s.zone, d.day_on, d.version_no, d.content, d.chain_head, a.name AS asked, b.name AS closed, d.closed_at
     FROM day_closes d JOIN sites s ON s.site_id = d.site_id JOIN users a ON a.user_id = d.asked_by JOIN users b ON b.user_id = d.closed_by
     WHERE d.day_close_id = ?`,
    [dayCloseId],
  );
  if (!row) throw notFound('closed day');
  const bytes = await renderDayClose({
    clinic: await clinicAt(db, row.site_id),
    zone: row.zone,
    day: JSON.parse(row.content) as DayView,
    versionNo: row.version_no,
    askedBy: row.asked,
    closedBy: row.closed,
    closedAt: row.closed_at,
    chainHead: row.chain_head?.toString('hex') ?? null,
  });
  return { filename: `day-${row.day_on}.pdf`, siteId: row.site_id, subjectType: 'day_close', bytes };
};
