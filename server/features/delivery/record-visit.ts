import type { ClinicDate } from '#domain/time/index';
import { recordAudit } from '#server/features/audit/index';
import { lockOpenDay, todayAt } from '#server/features/business-days/index';
import { courseEyes, lockCourse } from '#server/features/courses/index';
import { mustWorkAt, type StaffActor } from '#server/platform/actor';
import type { Deps } from '#server/platform/deps';
import { notFound, refused } from '#server/platform/problem';
import { inTransaction } from '#server/platform/transaction';
import { openObligations, recogniseDelivered } from './recognise.ts';

/**
 * Uses the next follow-up visit of a course and recognises its part of the price.
 * @throws Problem refused 'no_visit_left' | 'no_eye_done' | 'day_impossible'
 */
export async function recordFollowUpVisit(
  deps: Deps,
  courseId: number,
  visitedOn: ClinicDate,
  actor: StaffActor,
): Promise<void> {
  await inTransaction(deps.db, async (trx) => {
    const course = await lockCourse(trx, courseId);
    if (!course) throw notFound('course');
    mustWorkAt(actor, course.siteId, 'course');
    const firstDone = (await courseEyes(trx, courseId))
      .map((eye) => eye.doneOn)
      .filter((day) => day !== null)
      .sort()[0];
    if (firstDone === undefined)
      throw refused('no_eye_done', 'Follow-up visits begin after the first eye is done.');
    if (visitedOn < firstDone || visitedOn > (await todayAt(trx, deps, course.siteId))) {
      throw refused('day_impossible', 'A visit lies between the day of surgery and today.', 'visitedOn');
    }
    const next = (await openObligations(trx, courseId)).find((obligation) => obligation.kind === 'aftercare');
    if (!next) throw refused('no_visit_left', 'Every follow-up visit of this course has been used.');
    const bookedOn = await lockOpenDay(trx, deps, course.siteId);
    await recogniseDelivered(trx, deps, course, [next], { deliveredOn: visitedOn, bookedOn, actor });
    await recordAudit(trx, deps, {
      actor,
      action: 'visit.recorded',
      subjectType: 'course',
      subjectId: courseId,
      siteId: course.siteId,
      after: { visitedOn, obligationId: next.obligationId },
    });
  });
}
