import type { Eye } from '#domain/eye';
import type { FeeAgreement, FeeTerms } from '#domain/fees/index';
import type { Minor } from '#domain/money/index';
import type { ClinicDate } from '#domain/time/index';
import { type Db, rawRows, readMinor, type Trx } from '#server/platform/db';

/** Every version a surgeon agreed to, oldest first. */
export async function agreementsOf(trx: Db | Trx, surgeonUserId: number): Promise<FeeAgreement[]> {
  const rows = await rawRows<{
    fee_agreement_id: number;
    version_no: number;
    effective_on: ClinicDate;
    terms: string;
  }>(
    trx,
    'SELECT fee_agreement_id, version_no, effective_on, terms FROM fee_agreements WHERE surgeon_user_id = ? ORDER BY version_no',
    [surgeonUserId],
  );
  return rows.map((row) => ({
    feeAgreementId: row.fee_agreement_id,
    versionNo: row.version_no,
    effectiveOn: row.effective_on,
    terms: JSON.parse(row.terms) as FeeTerms,
  }));
}

/** Eyes and fees a surgeon accrued in a span of days, both ends included. */
export async function accruedBetween(
  trx: Trx,
  surgeonUserId: number,
  from: ClinicDate,
  to: ClinicDate,
): Promise<{ eyes: number; amountMinor: Minor }> {
  const [row] = await rawRows<{ eyes: number; total: unknown }>(
    trx,
    `SELECT COUNT(*) AS eyes, SUM(amount_minor) AS total FROM fee_lines
     WHERE surgeon_user_id = ? AND kind = 'accrual' AND earned_on BETWEEN ? AND ?`,
    [surgeonUserId, from, to],
  );
  return { eyes: row?.eyes ?? 0, amountMinor: readMinor(row?.total) };
}

/** A done eye whose fee has not accrued. */
export interface UnpaidEye {
  readonly courseId: number;
  readonly eye: Eye;
  readonly siteId: number;
  readonly surgeonUserId: number;
  readonly procedureCode: string;
  readonly procedureLabel: string;
  readonly doneOn: ClinicDate;
}

/** Done eyes without an accrual, of a course or of a surgeon in a span of days. */
export async function eyesWithoutFee(
  trx: Db | Trx,
  where:
    | { readonly courseId: number }
    | { readonly surgeonUserId: number; readonly from: ClinicDate; readonly to: ClinicDate },
): Promise<UnpaidEye[]> {
  const [sql, bindings] =
    'courseId' in where
      ? ['e.course_id = ?', [where.courseId]]
      : ['e.done_by_user_id = ? AND e.done_on BETWEEN ? AND ?', [where.surgeonUserId, where.from, where.to]];
  const rows = await rawRows<{
    course_id: number;
    eye: Eye;
    site_id: number;
    done_by_user_id: number;
    procedure_code: string;
    procedure_label: string;
    done_on: ClinicDate;
  }>(
    trx,
    `SELECT e.course_id, e.eye, c.site_id, e.done_by_user_id, COALESCE(e.done_procedure_code, e.procedure_code) AS procedure_code,
            e.procedure_label, e.done_on
     FROM course_eyes e JOIN courses c ON c.course_id = e.course_id
     LEFT JOIN fee_lines f ON f.accrual_course_id = e.course_id AND f.eye = e.eye
     WHERE e.state = 'done' AND f.fee_line_id IS NULL AND ${sql} ORDER BY e.done_on, e.course_id, e.eye`,
    bindings,
  );
  return rows.map((row) => ({
    courseId: row.course_id,
    eye: row.eye,
    siteId: row.site_id,
    surgeonUserId: row.done_by_user_id,
    procedureCode: row.procedure_code,
    procedureLabel: row.procedure_label,
    doneOn: row.done_on,
  }));
}
