import { EYES } from '#domain/eye';
import { type CourseInput, type PriceBook, quoteCourse } from '#domain/pricing/index';
import { type ClinicDate, formatDay } from '#domain/time/index';
import type { QuoteOption } from './content.ts';

/** Why an option cannot be accepted on a day: the rule's name and a sentence. */
export interface AcceptanceRefusal {
  readonly reason: 'estimate' | 'plan_expired' | 'surgery_day_past' | 'price_moved';
  readonly words: string;
}

/**
 * Whether an issued option may be accepted on a day. The price stands as issued; the plan must still be good, the days of
 * surgery still ahead, and the same engine with the same book must give the same total from that day on.
 */
export function refuseAcceptance(
  option: QuoteOption,
  book: PriceBook,
  acceptedOn: ClinicDate,
): AcceptanceRefusal | null {
  const { approvedPlan } = option.input;
  if (option.priced.standing === 'estimate' || approvedPlan === null) {
    const words =
      'This is an estimate, subject to assessment: it can be accepted once the surgeon has approved a plan.';
    return { reason: 'estimate', words };
  }
  if (approvedPlan.expiresOn < acceptedOn) {
    const until = formatDay(approvedPlan.expiresOn);
    const words = `The surgeon’s plan was good until ${until}. The surgeon renews it, then the quote is sent anew.`;
    return { reason: 'plan_expired', words };
  }
  if (daysOf(option.input).some((day) => day < acceptedOn)) {
    const words = 'The day of surgery on this quote has passed. The clinic sends it anew with another day.';
    return { reason: 'surgery_day_past', words };
  }
  const anew = quoteCourse({ ...option.input, acceptedOn }, book);
  if (!anew.ok || anew.course.totalMinor !== option.priced.totalMinor) {
    const words = 'This price can no longer be worked out as it was quoted. The clinic sends it anew.';
    return { reason: 'price_moved', words };
  }
  return null;
}

function daysOf(input: CourseInput): ClinicDate[] {
  return EYES.filter((eye) => input.eyes[eye] !== null).flatMap((eye) => {
    const on = input.surgery.plan === 'staged' ? input.surgery.on[eye] : input.surgery.on;
    return on === null ? [] : [on];
  });
}
