import type { Eye } from '#domain/eye';
import type { CurrencyCode, Minor } from '#domain/money/index';
import type { ClinicDate } from '#domain/time/index';
import { type Db, rawRows, readMinor, type Trx } from '#server/platform/db';

/** The course of care as it was bought; it never changes, its eyes do. */
export interface CourseRow {
  readonly courseId: number;
  readonly number: string;
  readonly siteId: number;
  readonly patientId: number;
  readonly quoteId: number;
  readonly quoteVersionId: number;
  readonly surgeonUserId: number;
  readonly currency: CurrencyCode;
  readonly totalMinor: Minor;
  readonly taxMinor: Minor;
  readonly acceptedOn: ClinicDate;
}

export type EyeState = 'planned' | 'done' | 'cancelled';

export interface CourseEyeRow {
  readonly eye: Eye;
  readonly procedureCode: string;
  readonly procedureLabel: string;
  readonly priceMinor: Minor;
  readonly state: EyeState;
  readonly plannedOn: ClinicDate | null;
  readonly doneOn: ClinicDate | null;
}

export interface CourseDueRow {
  readonly dueNo: number;
  readonly kind: 'deposit' | 'balance' | 'instalment' | 'lender';
  readonly label: string;
  /** null while the surgery it is due before has no day. */
  readonly dueOn: ClinicDate | null;
  readonly amountMinor: Minor;
}

async function courseWhere(trx: Db | Trx, where: string, courseId: number): Promise<CourseRow | undefined> {
  const [row] = await rawRows<{
    course_id: number;
    number: string;
    site_id: number;
    patient_id: number;
    quote_id: number;
    quote_version_id: number;
    surgeon_user_id: number;
    currency: CurrencyCode;
    total_minor: number;
    tax_minor: number;
    accepted_on: ClinicDate;
  }>(
    trx,
    `SELECT course_id, number, site_id, patient_id, quote_id, quote_version_id, surgeon_user_id, currency, total_minor,
            tax_minor, accepted_on
     FROM courses WHERE ${where}`,
    [courseId],
  );
  return row
    ? {
        courseId: row.course_id,
        number: row.number,
        siteId: row.site_id,
        patientId: row.patient_id,
        quoteId: row.quote_id,
        quoteVersionId: row.quote_version_id,
        surgeonUserId: row.surgeon_user_id,
        currency: row.currency,
        totalMinor: readMinor(row.total_minor),
        taxMinor: readMinor(row.tax_minor),
        acceptedOn: row.accepted_on,
      }
    : undefined;
}

/** A course by its key, unlocked. */
export async function courseOf(trx: Db | Trx, courseId: number): Promise<CourseRow | undefined> {
  return await courseWhere(trx, 'course_id = ?', courseId);
}

/** A course locked until the end of the transaction: everything that moves its money begins here. */
export async function lockCourse(trx: Trx, courseId: number): Promise<CourseRow | undefined> {
  return await courseWhere(trx, 'course_id = ? FOR UPDATE', courseId);
}

/** The eyes of a course, right before left. */
export async function courseEyes(trx: Db | Trx, courseId: number): Promise<CourseEyeRow[]> {
  const rows = await rawRows<{
    eye: Eye;
    procedure_code: string;
    procedure_label: string;
    price_minor: number;
    state: EyeState;
    planned_on: ClinicDate | null;
    done_on: ClinicDate | null;
  }>(
    trx,
    'SELECT eye, procedure_code, procedure_label, price_minor, state, planned_on, done_on FROM course_eyes WHERE course_id = ? ORDER BY eye',
    [courseId],
  );
  return rows.map((row) => ({
    eye: row.eye,
    procedureCode: row.procedure_code,
    procedureLabel: row.procedure_label,
    priceMinor: readMinor(row.price_minor),
    state: row.state,
    plannedOn: row.planned_on,
    doneOn: row.done_on,
  }));
}

/** What is due when, in order. */
export async function courseDues(trx: Db | Trx, courseId: number): Promise<CourseDueRow[]> {
  const rows = await rawRows<{
    due_no: number;
    kind: CourseDueRow['kind'];
    label: string;
    due_on: ClinicDate | null;
    amount_minor: number;
  }>(
    trx,
    'SELECT due_no, kind, label, due_on, amount_minor FROM course_dues WHERE course_id = ? ORDER BY due_no',
    [courseId],
  );
  return rows.map((row) => ({
    dueNo: row.due_no,
    kind: row.kind,
    label: row.label,
    dueOn: row.due_on,
    amountMinor: readMinor(row.amount_minor),
  }));
}

/** What has been paid towards a course and what was paid beyond it, from receipts that stand. */
export async function coursePaid(
  trx: Db | Trx,
  courseId: number,
): Promise<{ readonly appliedMinor: Minor; readonly creditMinor: Minor }> {
  const [row] = await rawRows<{ applied: unknown; credit: unknown }>(
    trx,
    `SELECT SUM(r.applied_minor) AS applied, SUM(r.credit_minor) AS credit
     FROM receipts r LEFT JOIN receipt_voids v ON v.receipt_id = r.receipt_id
     WHERE r.course_id = ? AND v.receipt_id IS NULL`,
    [courseId],
  );
  return { appliedMinor: readMinor(row?.applied), creditMinor: readMinor(row?.credit) };
}
