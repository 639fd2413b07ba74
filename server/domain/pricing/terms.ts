import { formatAmount } from '#domain/money/index';
import { addDays, type ClinicDate, formatDay } from '#domain/time/index';
import { coverOf, followUpsOf } from './aftercare.ts';
import { discountSize, limitsOf } from './check-discounts.ts';
import type { WantedCourse } from './check-input.ts';
import type {
  ApprovalNeeded,
  CreditTerms,
  Included,
  PackageComparison,
  PricedCourse,
  Warning,
  WarningCode,
} from './course.ts';
import { isInterestFreeExempt } from './credit.ts';
import { daysApart } from './reductions.ts';

/** Last day a quote holds, the day of issue being the first. */
export function validUntil(quotedOn: ClinicDate, validityDays: number): ClinicDate {
  return addDays(quotedOn, validityDays - 1);
}

/** Quotable only under a plan of the surgeon that is still good on the day of the quote. */
export function standingOf(wanted: WantedCourse): PricedCourse['standing'] {
  const { approvedPlan, quotedOn } = wanted.input;
  return approvedPlan !== null && approvedPlan.expiresOn >= quotedOn ? 'quotable' : 'estimate';
}

/** Discounts over the counsellor's own limit: another person has to agree. */
export function approvalsOf(wanted: WantedCourse): ApprovalNeeded[] {
  return wanted.discounts
    .filter(({ overOwnLimit }) => overOwnLimit)
    .map(({ rule, off }) => {
      const limits = limitsOf(rule);
      return {
        discountId: rule.id,
        reason: rule.reason,
        asked: discountSize(rule, off.kind === 'rate' ? off.rateBp : off.amountMinor, wanted.compiled),
        ownLimit: discountSize(rule, limits.own, wanted.compiled),
        approverLimit: discountSize(rule, limits.approver, wanted.compiled),
      };
    });
}

/** What the price includes, in the patient's words. */
export function includedOf(wanted: WantedCourse): Included[] {
  const included: Included[] = [];
  const note = ({ id, label }: { readonly id: string; readonly label: string }) => {
    if (!included.some(({ ruleId }) => ruleId === id)) included.push({ ruleId: id, label });
  };
  for (const schedule of followUpsOf(wanted)) note(schedule);
  for (const eye of wanted.eyes) {
    const cover = coverOf(wanted, eye);
    if (cover) note(cover);
  }
  if (wanted.package) {
    for (const label of wanted.package.included) included.push({ ruleId: wanted.package.id, label });
  }
  return included;
}

/** What it does not include: the book's list and the package's. */
export function notIncludedOf(wanted: WantedCourse): string[] {
  const { notIncluded } = wanted.compiled.book;
  const more = wanted.package?.notIncluded.filter((words) => !notIncluded.includes(words)) ?? [];
  return notIncluded.concat(more);
}

/** Everything a person should know before sending or accepting. */
export function warningsOf(
  wanted: WantedCourse,
  comparison: PackageComparison | null,
  credit: CreditTerms | null,
): Warning[] {
  return planWarnings(wanted).concat(
    secondEyeWarnings(wanted),
    discountWarnings(wanted),
    otherWarnings(wanted, comparison, credit),
  );
}

function warn(code: WarningCode, words: string, eye: Warning['eye'] = null): Warning {
  return { code, words, eye };
}

function planWarnings(wanted: WantedCourse): Warning[] {
  const { approvedPlan, quotedOn } = wanted.input;
  if (approvedPlan === null) {
    return [warn('estimate', 'An estimate, subject to assessment: the surgeon has not approved a plan.')];
  }
  if (approvedPlan.expiresOn < quotedOn) {
    const words = `${approvedPlan.approvedBy}’s plan was good until ${formatDay(approvedPlan.expiresOn)}.`;
    return [warn('plan_expired', `${words} Ask the surgeon to renew it.`)];
  }
  return wanted.eyes
    .filter(({ on }) => on !== null && on > approvedPlan.expiresOn)
    .map(({ eye }) => {
      const words = `The surgery lies after ${formatDay(approvedPlan.expiresOn)}, when the approved plan ends.`;
      return warn('plan_expires_before_surgery', words, eye);
    });
}

function secondEyeWarnings(wanted: WantedCourse): Warning[] {
  const rule = wanted.secondEyeRule;
  const second = wanted.eyes[1];
  if (!rule || !second || wanted.package?.price.kind === 'amount') return [];
  const apart = daysApart(wanted);
  const missed = wanted.staged && (!rule.staged || apart === null || apart > rule.staged.withinDays);
  if (missed) {
    const why = rule.staged
      ? `${apart ?? '?'} days apart, and the second-eye price needs ${rule.staged.withinDays} or fewer`
      : 'the second-eye price is for both eyes on one day';
    return [warn('second_eye_reduction_missed', `No second-eye price: ${why}.`, second.eye)];
  }
  if ((wanted.staged ? rule.staged : rule.sameSession) === null) return [];
  const then =
    rule.ifNever?.kind === 'supplement'
      ? `${formatAmount(rule.ifNever.amountMinor, wanted.compiled.book.currency)} is added to the first`
      : 'the first keeps its price';
  return [warn('second_eye_condition', `If the second eye is never treated, ${then}.`, second.eye)];
}

function discountWarnings(wanted: WantedCourse): Warning[] {
  return wanted.discounts.flatMap(({ rule, overOwnLimit }) => {
    const found: Warning[] = [];
    if (rule.aftercare) found.push(warn('aftercare_changed', `${rule.reason}: ${rule.aftercare.words}`));
    if (overOwnLimit) found.push(warn('approval_needed', `${rule.reason} needs another person’s approval.`));
    return found;
  });
}

function otherWarnings(
  wanted: WantedCourse,
  comparison: PackageComparison | null,
  credit: CreditTerms | null,
): Warning[] {
  const found: Warning[] = [];
  if (wanted.eyes.some(({ on }) => on === null)) {
    found.push(warn('no_surgery_day', 'No day of surgery is agreed; days before surgery stand for dates.'));
  }
  if (wanted.priceList && wanted.priceList.evidence !== null) {
    found.push(warn('evidence_needed', `${wanted.priceList.label}: ${wanted.priceList.evidence}.`));
  }
  if (comparison && comparison.savesMinor <= 0) {
    const words = comparison.chargedAsParts
      ? 'its parts cost no more, so they are charged'
      : 'it costs no less than its parts';
    found.push(warn('package_no_cheaper', `${comparison.label}: ${words}.`));
  }
  const days = credit?.kind === 'interest_free' ? credit.instalments.map(({ dueOn }) => dueOn) : [];
  if (!isInterestFreeExempt(wanted.acceptedOn, days)) {
    const words = 'More than twelve instalments, or the last a year or more after the agreement:';
    found.push(warn('not_interest_free_exempt', `${words} consumer credit rules may apply where you are.`));
  }
  return found;
}
