import type { Eye } from '#domain/eye';
import { ACCOUNT, deliveryEntry } from '#domain/ledger/index';
import { greatest, type Minor, negate, ZERO } from '#domain/money/index';
import type { ClinicDate } from '#domain/time/index';
import type { CourseRow } from '#server/features/courses/index';
import { courseBalance, postEntry } from '#server/features/ledger/index';
import { type Actor, userIdOf } from '#server/platform/actor';
import { insertRow, rawRows, readMinor, sqlInstant, type Trx } from '#server/platform/db';
import type { Deps } from '#server/platform/deps';

/** Something promised and not yet delivered, with its part of the price. */
export interface OpenObligation {
  readonly obligationId: number;
  readonly kind: string;
  readonly eye: Eye | null;
  readonly label: string;
  readonly allocatedMinor: Minor;
  readonly taxMinor: Minor;
  readonly account: string;
}

/** What of a course is still to be delivered, in the order of the quote. */
export async function openObligations(trx: Trx, courseId: number): Promise<OpenObligation[]> {
  const rows = await rawRows<{
    obligation_id: number;
    kind: string;
    eye: Eye | null;
    label: string;
    allocated_minor: number;
    tax_minor: number;
    account_code: string;
  }>(
    trx,
    `SELECT o.obligation_id, o.kind, o.eye, o.label, o.allocated_minor, o.tax_minor, o.account_code
     FROM obligations o LEFT JOIN recognitions r ON r.obligation_id = o.obligation_id
     WHERE o.course_id = ? AND r.obligation_id IS NULL ORDER BY o.obligation_no`,
    [courseId],
  );
  return rows.map((row) => ({
    obligationId: row.obligation_id,
    kind: row.kind,
    eye: row.eye,
    label: row.label,
    allocatedMinor: readMinor(row.allocated_minor),
    taxMinor: readMinor(row.tax_minor),
    account: row.account_code,
  }));
}

/**
 * Recognises what was delivered: one row and one entry per obligation, never before its delivery (invariants 6 and 11).
 * The course must be locked by the caller.
 */
export async function recogniseDelivered(
  trx: Trx,
  deps: Pick<Deps, 'clock'>,
  course: CourseRow,
  delivered: readonly OpenObligation[],
  at: { readonly deliveredOn: ClinicDate; readonly bookedOn: ClinicDate; readonly actor: Actor },
): Promise<void> {
  for (const obligation of delivered) {
    const recognitionId = await insertRow(trx, 'recognitions', {
      obligation_id: obligation.obligationId,
      amount_minor: obligation.allocatedMinor,
      tax_minor: obligation.taxMinor,
      delivered_on: at.deliveredOn,
      booked_on: at.bookedOn,
      recorded_by: userIdOf(at.actor),
      recorded_at: sqlInstant(deps.clock.now()),
    });
    if (obligation.allocatedMinor === 0 && obligation.taxMinor === 0) continue;
    const draft = deliveryEntry({
      courseId: course.courseId,
      currency: course.currency,
      occurredOn: at.deliveredOn,
      memo: `${obligation.label}, course ${course.number}`,
      liabilityMinor: greatest(
        negate(await courseBalance(trx, course.courseId, ACCOUNT.contractLiability)),
        ZERO,
      ),
      obligationId: obligation.obligationId,
      ...(obligation.eye === null ? {} : { eye: obligation.eye }),
      incomeAccount: obligation.account,
      amountMinor: obligation.allocatedMinor,
      taxMinor: obligation.taxMinor,
    });
    await postEntry(trx, deps, {
      siteId: course.siteId,
      source: { type: 'recognition', id: recognitionId },
      draft,
      actor: at.actor,
      bookedOn: at.bookedOn,
    });
  }
}
