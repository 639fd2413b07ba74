import { applyRate, type Minor, splitByWeights, subtract, ZERO } from '#domain/money/index';
import type { SharedCareTerms } from './agreement.ts';

/** A provider who cared for an eye on some days, counted from the day after surgery as 1, both ends included. */
export interface CarePeriod {
  readonly payeeId: number;
  readonly fromDay: number;
  readonly toDay: number;
}

export type SharedFee =
  | {
      readonly ok: true;
      readonly surgeonMinor: Minor;
      readonly providers: readonly {
        readonly payeeId: number;
        readonly days: number;
        readonly amountMinor: Minor;
      }[];
    }
  | { readonly ok: false; readonly field: string; readonly words: string };

/**
 * Splits a fee between the surgeon and those who cared afterwards: the care part by the days each actually cared for, out
 * of the days agreed. Days nobody else cared for stay with the surgeon. (Published analogue: Medicare pays 20 % of the
 * global fee for post-operative care, by days of a 90-day period.)
 */
export function shareFee(feeMinor: Minor, terms: SharedCareTerms, periods: readonly CarePeriod[]): SharedFee {
  const inOrder = periods.map((period, index) => ({ ...period, field: `periods.${index}` }));
  inOrder.sort((a, b) => a.fromDay - b.fromDay);
  let cared = 0;
  for (const { fromDay, toDay, field } of inOrder) {
    if (fromDay < 1 || toDay < fromDay || toDay > terms.days)
      return { ok: false, field, words: `Care lies within days 1 to ${terms.days}.` };
    if (fromDay <= cared) return { ok: false, field, words: 'Two providers cannot care for the same day.' };
    cared = toDay;
  }
  const days = inOrder.map(({ fromDay, toDay }) => toDay - fromDay + 1);
  const surgeonDays = terms.days - days.reduce((total, each) => total + each, 0);
  const careMinor = applyRate(feeMinor, terms.careRateBp);
  const [ownCare, ...others] = splitByWeights(careMinor, [surgeonDays, ...days]);
  return {
    ok: true,
    surgeonMinor: subtract(feeMinor, subtract(careMinor, ownCare ?? ZERO)),
    providers: inOrder.map(({ payeeId }, index) => ({
      payeeId,
      days: days[index] ?? 0,
      amountMinor: others[index] ?? ZERO,
    })),
  };
}
