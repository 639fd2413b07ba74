import type { Eye } from '#domain/eye';
import { formatMoney } from '#domain/money/index';
import type { ClinicDate } from '#domain/time/index';
import { recordAudit } from '#server/features/audit/index';
import { lockOpenDay } from '#server/features/business-days/index';
import { type CourseMoney, courseMoney, lockCourse, unpaidOf } from '#server/features/courses/index';
import { hasRole, mustWorkAt, type StaffActor } from '#server/platform/actor';
import type { Trx } from '#server/platform/db';
import type { Deps } from '#server/platform/deps';
import { hint } from '#server/platform/live-hints';
import { conflict, notFound, refused } from '#server/platform/problem';
import { inTransaction } from '#server/platform/transaction';
import { openObligations, recogniseDelivered } from './recognise.ts';

declare module '#server/platform/facts' {
  interface FactMap {
    'eye.done': {
      readonly courseId: number;
      readonly eye: Eye;
      readonly siteId: number;
      readonly surgeonUserId: number;
      readonly doneOn: ClinicDate;
    };
  }
}

export interface EyeDone {
  readonly courseId: number;
  readonly eye: Eye;
  readonly doneOn: ClinicDate;
  readonly overrideReason: string | undefined;
  readonly actor: StaffActor;
}

/** What the first eye done delivers beside its own surgery: what was promised for both and is used up on the day. */
const DELIVERED_WITH_FIRST_EYE = new Set(['assessment', 'service', 'goods']);

/**
 * Records that an eye was done: its surgery is recognised (with the assessment and both eyes' extras on the first eye) and
 * whoever owes something for it hears of it. The surgeon records it, or the desk in the surgeon's name.
 * @throws Problem refused 'eye_not_paid' | 'day_impossible' | 'override_needs_manager', conflict 'eye_not_planned'
 */
export async function recordEyeDone(deps: Deps, done: EyeDone): Promise<void> {
  await inTransaction(deps.db, async (trx) => {
    const course = await lockCourse(trx, done.courseId);
    if (!course) throw notFound('course');
    mustWorkAt(done.actor, course.siteId, 'course');
    const money = await courseMoney(trx, deps, course.courseId);
    mustBeDoable(money, done);
    const surgeonUserId = hasRole(done.actor, 'surgeon') ? done.actor.userId : course.surgeonUserId;
    const bookedOn = await lockOpenDay(trx, deps, course.siteId);
    await markDone(trx, money, done, surgeonUserId);
    const first = money.eyes.every((eye) => eye.state !== 'done');
    const delivered = (await openObligations(trx, course.courseId)).filter(
      (obligation) =>
        (obligation.eye === done.eye &&
          (obligation.kind === 'surgery' || DELIVERED_WITH_FIRST_EYE.has(obligation.kind))) ||
        (first && obligation.eye === null && DELIVERED_WITH_FIRST_EYE.has(obligation.kind)),
    );
    await recogniseDelivered(trx, deps, course, delivered, {
      deliveredOn: done.doneOn,
      bookedOn,
      actor: done.actor,
    });
    await recordAudit(trx, deps, {
      actor: done.actor,
      action: 'eye.done',
      subjectType: 'course',
      subjectId: course.courseId,
      siteId: course.siteId,
      after: {
        eye: done.eye,
        doneOn: done.doneOn,
        surgeonUserId,
        overrideReason: done.overrideReason ?? null,
      },
    });
    await hint(trx, deps.clock, { siteId: course.siteId, topic: 'courses', subjectId: course.courseId });
    await deps.facts.publish(trx, 'eye.done', {
      courseId: course.courseId,
      eye: done.eye,
      siteId: course.siteId,
      surgeonUserId,
      doneOn: done.doneOn,
    });
  });
}

function mustBeDoable(money: CourseMoney, done: EyeDone): void {
  const eye = money.eyes.find((candidate) => candidate.eye === done.eye);
  if (!eye) throw notFound('eye on this course');
  if (eye.state !== 'planned') {
    throw conflict('eye_not_planned', `This eye is ${eye.state} already; nothing was changed.`);
  }
  if (done.doneOn > money.today)
    throw refused('day_impossible', 'An eye cannot have been done on a day to come.', 'doneOn');
  if (done.doneOn < money.course.acceptedOn) {
    throw refused('day_impossible', 'The quote was accepted after this day.', 'doneOn');
  }
  const unpaid = unpaidOf(money, done.eye);
  if (unpaid <= 0) return;
  if (done.overrideReason === undefined) {
    throw refused(
      'eye_not_paid',
      `${formatMoney(unpaid, money.course.currency)} of this eye’s share is unpaid. Take it first, or let the manager give a reason.`,
      'overrideReason',
    );
  }
  if (!hasRole(done.actor, 'manager')) {
    throw refused(
      'override_needs_manager',
      'Only the manager may let an unpaid eye be done.',
      'overrideReason',
    );
  }
}

async function markDone(trx: Trx, money: CourseMoney, done: EyeDone, surgeonUserId: number): Promise<void> {
  const eye = money.eyes.find((candidate) => candidate.eye === done.eye);
  await trx('course_eyes')
    .where({ course_id: done.courseId, eye: done.eye })
    .update({
      state: 'done',
      done_on: done.doneOn,
      done_at_site_id: money.course.siteId,
      done_procedure_code: eye?.procedureCode ?? null,
      done_by_user_id: surgeonUserId,
      recorded_by: done.actor.userId,
      override_reason: done.overrideReason ?? null,
    });
}
