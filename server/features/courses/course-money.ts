import type { Eye } from '#domain/eye';
import { type Minor, subtract } from '#domain/money/index';
import { type DueSum, dueNow, type PaidFor, paidFor } from '#domain/payments/index';
import type { ClinicDate } from '#domain/time/index';
import { todayAt } from '#server/features/business-days/index';
import type { Db, Trx } from '#server/platform/db';
import type { Deps } from '#server/platform/deps';
import { notFound } from '#server/platform/problem';
import {
  type CourseDueRow,
  type CourseEyeRow,
  type CourseRow,
  courseDues,
  courseEyes,
  courseOf,
  coursePaid,
} from './course-repository.ts';

/** A course with its money today, from the records and not from the ledger. */
export interface CourseMoney {
  readonly course: CourseRow;
  readonly eyes: readonly CourseEyeRow[];
  readonly dues: readonly CourseDueRow[];
  readonly today: ClinicDate;
  readonly paidMinor: Minor;
  readonly creditMinor: Minor;
  readonly leftMinor: Minor;
  readonly dueNowMinor: Minor;
  readonly paidFor: PaidFor;
}

/**
 * What a course costs, what was paid, what is due today, and what the payments have paid for.
 * @throws Problem not_found when there is no such course
 */
export async function courseMoney(
  trx: Trx | Db,
  deps: Pick<Deps, 'clock'>,
  courseId: number,
): Promise<CourseMoney> {
  const course = await courseOf(trx, courseId);
  if (!course) throw notFound('course');
  const [eyes, dues, paid, today] = [
    await courseEyes(trx, courseId),
    await courseDues(trx, courseId),
    await coursePaid(trx, courseId),
    await todayAt(trx, deps, course.siteId),
  ];
  const sums: DueSum[] = dues.map((due) => ({
    dueNo: due.dueNo,
    dueOn: due.dueOn,
    amountMinor: due.amountMinor,
  }));
  const shares = eyes.map((eye) => ({
    eye: eye.eye,
    shareMinor: eye.priceMinor,
    surgeryOn: eye.doneOn ?? eye.plannedOn,
  }));
  return {
    course,
    eyes,
    dues,
    today,
    paidMinor: paid.appliedMinor,
    creditMinor: paid.creditMinor,
    leftMinor: subtract(course.totalMinor, paid.appliedMinor),
    dueNowMinor: dueNow(sums, paid.appliedMinor, today),
    paidFor: paidFor({ totalMinor: course.totalMinor, eyes: shares }, sums, paid.appliedMinor),
  };
}

/** What is unpaid of one eye's share; zero for an eye the course does not have. */
export function unpaidOf(money: CourseMoney, eye: Eye): Minor {
  return money.paidFor.eyes.find((share) => share.eye === eye)?.unpaidMinor ?? (0 as Minor);
}
