import type { Eye } from '#domain/eye';
import {
  accrueFee,
  agreementOn,
  type FeeAgreement,
  type FeeEvent,
  type FeeOutcome,
} from '#domain/fees/index';
import { feeAccruedEntry } from '#domain/ledger/index';
import { type Minor, scale, ZERO } from '#domain/money/index';
import { type ClinicDate, clinicDate, firstOfMonth, lastOfMonth } from '#domain/time/index';
import { recordAudit } from '#server/features/audit/index';
import { lockOpenDay } from '#server/features/business-days/index';
import { type CourseMoney, courseMoney } from '#server/features/courses/index';
import { postEntry } from '#server/features/ledger/index';
import { SYSTEM } from '#server/platform/actor';
import { type Db, insertRow, rawRows, sqlInstant, type Trx } from '#server/platform/db';
import type { Deps } from '#server/platform/deps';
import { accruedBetween, agreementsOf, eyesWithoutFee, type UnpaidEye } from './fee-repository.ts';

declare module '#server/platform/facts' {
  interface FactMap {
    'fee.accrued': { readonly feeLineId: number; readonly surgeonUserId: number; readonly siteId: number };
  }
}

/**
 * Accrues what a course's done eyes have earned by now: after an eye is done and after money came in. Eyes that are not
 * due stay held; their reason is worked out when it is asked for. The course is locked by the caller's use case.
 */
export async function accrueCourseFees(
  trx: Trx,
  deps: Pick<Deps, 'clock' | 'facts'>,
  courseId: number,
): Promise<void> {
  const eyes = await eyesWithoutFee(trx, { courseId });
  if (eyes.length === 0) return;
  for (const eye of eyes) {
    await lockSurgeon(trx, eye.surgeonUserId);
    const money = await courseMoney(trx, deps, courseId);
    const outcome = await feeOf(trx, eye, money);
    if (outcome?.state === 'accrued') await postAccrual(trx, deps, eye, money, outcome);
  }
}

/** Volume bands and caps count a surgeon's eyes: two accruals of one surgeon may not count at once. */
async function lockSurgeon(trx: Trx, surgeonUserId: number): Promise<void> {
  await rawRows(trx, 'SELECT user_id FROM users WHERE user_id = ? FOR UPDATE', [surgeonUserId]);
}

/** What an eye earns under the version in force on its day; undefined where nothing was ever agreed. */
export async function feeOf(
  trx: Trx | Db,
  eye: UnpaidEye,
  money: CourseMoney,
): Promise<FeeOutcome | undefined> {
  const agreement = agreementOn(await agreementsOf(trx, eye.surgeonUserId), eye.doneOn);
  if (!agreement) return undefined;
  return accrueFee(await feeEvent(trx as Trx, eye, money, agreement), agreement);
}

async function feeEvent(
  trx: Trx,
  eye: UnpaidEye,
  money: CourseMoney,
  agreement: FeeAgreement,
): Promise<FeeEvent> {
  const share = money.paidFor.eyes.find((each) => each.eye === eye.eye);
  const priceMinor = money.eyes.find((each) => each.eye === eye.eye)?.priceMinor ?? ZERO;
  const month = await accruedBetween(
    trx,
    eye.surgeonUserId,
    firstOfMonth(eye.doneOn),
    lastOfMonth(eye.doneOn),
  );
  const { basis } = agreement.terms;
  const byYear = basis.kind === 'volume_bands' && basis.per === 'year';
  const period = byYear ? await accruedBetween(trx, eye.surgeonUserId, ...yearAround(eye.doneOn)) : month;
  return {
    kind: 'surgery',
    eye: eye.eye,
    procedureCode: eye.procedureCode,
    procedureLabel: eye.procedureLabel,
    doneOn: eye.doneOn,
    shareMinor: priceMinor,
    collectedMinor: share?.paidMinor ?? ZERO,
    taxMinor: taxWithin(money, share?.paidMinor ?? ZERO),
    paymentCostsMinor: ZERO,
    directCostsMinor: ZERO,
    eyesBefore: period.eyes,
    accruedThisMonthMinor: month.amountMinor,
  };
}

/** Tax within an amount paid towards a course, at the course's own average. */
function taxWithin(money: CourseMoney, paidMinor: Minor): Minor {
  const { totalMinor, taxMinor } = money.course;
  return totalMinor === 0 ? ZERO : scale(paidMinor, taxMinor, totalMinor);
}

function yearAround(day: ClinicDate): [ClinicDate, ClinicDate] {
  const year = day.slice(0, 4);
  return [clinicDate(`${year}-01-01`), clinicDate(`${year}-12-31`)];
}

async function postAccrual(
  trx: Trx,
  deps: Pick<Deps, 'clock' | 'facts'>,
  eye: UnpaidEye,
  money: CourseMoney,
  outcome: Extract<FeeOutcome, { state: 'accrued' }>,
): Promise<void> {
  const { course } = money;
  const bookedOn = await lockOpenDay(trx, deps, course.siteId);
  const feeLineId = await insertRow(trx, 'fee_lines', {
    surgeon_user_id: eye.surgeonUserId,
    fee_agreement_id: outcome.feeAgreementId,
    site_id: course.siteId,
    course_id: course.courseId,
    eye: eye.eye,
    kind: 'accrual',
    currency: course.currency,
    amount_minor: outcome.feeMinor,
    earned_on: eye.doneOn,
    booked_on: bookedOn,
    derivation: JSON.stringify({ ...outcome.why, clawback: outcome.clawback }),
    recorded_at: sqlInstant(deps.clock.now()),
  });
  if (outcome.feeMinor > 0) {
    const draft = feeAccruedEntry({
      payeeId: eye.surgeonUserId,
      courseId: course.courseId,
      eye: eye.eye,
      occurredOn: eye.doneOn,
      memo: `Fee, ${eyeWords(eye.eye)}, course ${course.number}`,
      currency: course.currency,
      amountMinor: outcome.feeMinor,
    });
    await postEntry(trx, deps, {
      siteId: course.siteId,
      source: { type: 'fee_line', id: feeLineId },
      draft,
      actor: SYSTEM,
      bookedOn,
    });
  }
  await recordAudit(trx, deps, {
    actor: SYSTEM,
    action: 'fee.accrued',
    subjectType: 'fee_line',
    subjectId: feeLineId,
    siteId: course.siteId,
    after: {
      surgeonUserId: eye.surgeonUserId,
      courseId: course.courseId,
      eye: eye.eye,
      amountMinor: outcome.feeMinor,
    },
  });
  await deps.facts.publish(trx, 'fee.accrued', {
    feeLineId,
    surgeonUserId: eye.surgeonUserId,
    siteId: course.siteId,
  });
}

function eyeWords(eye: Eye): string {
  return eye === 'OD' ? 'right eye' : 'left eye';
}
