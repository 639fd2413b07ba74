import { add, type Minor, minor, scale, subtract, sum, times, ZERO } from '#domain/money/index';
import type { Tender } from './tenders.ts';

export interface TenderGiven {
  readonly tender: Tender;
  /** What was handed over; for cash what lay on the counter, before change. */
  readonly amountMinor: Minor;
}

export interface PaymentAsked {
  readonly tenders: readonly TenderGiven[];
  /** What is left of the course's price. */
  readonly leftMinor: Minor;
  /** What the payer means to pay now, where that is not all that is left: change is worked out against it. */
  readonly askedMinor?: Minor;
  /** The payer's credit on account, for a tender that spends it; none when absent. */
  readonly onAccountMinor?: Minor;
  /** Smallest cash step of the currency in minor units (5 where there are no one- and two-cent coins); 1 rounds nothing. */
  readonly cashStepMinor: number;
}

export type PaymentRefusalCode =
  | 'no_tender'
  | 'not_positive'
  | 'online_at_the_desk'
  | 'not_in_cash_steps'
  | 'cash_not_needed'
  | 'more_than_on_account'
  | 'credit_not_needed';

export interface PaymentRefusal {
  readonly field: string;
  readonly code: PaymentRefusalCode;
  readonly words: string;
}

export type PaymentTaken =
  | {
      readonly ok: true;
      /** Tenders less change plus rounding (invariant 5); applied plus credit. */
      readonly totalMinor: Minor;
      readonly appliedMinor: Minor;
      readonly creditMinor: Minor;
      readonly changeMinor: Minor;
      /** Positive: the clinic forgives it; negative: the patient pays it. */
      readonly roundingMinor: Minor;
    }
  | { readonly ok: false; readonly refusals: readonly PaymentRefusal[] };

/**
 * Splits what was handed over: towards the price, change out of cash and of nothing else, and what is beyond the price and
 * cannot be change as credit on account. With a cash step, cash that settles what is asked is rounded to the step, halves
 * away from zero.
 */
export function takePayment(asked: PaymentAsked): PaymentTaken {
  const refusals = [...checkTenders(asked), ...checkSums(asked)];
  if (refusals.length > 0) return { ok: false, refusals };
  const cash = given(asked, 'cash');
  const other = subtract(sum(asked.tenders.map(({ amountMinor }) => amountMinor)), cash);
  const due = cashDue(asked);
  const rounded = roundToStep(due, asked.cashStepMinor);
  const settles = cash > 0 && cash >= rounded;
  const changeMinor = settles ? subtract(cash, rounded) : ZERO;
  const roundingMinor = settles ? subtract(due, rounded) : ZERO;
  const totalMinor = add(subtract(add(cash, other), changeMinor), roundingMinor);
  const appliedMinor = minor(Math.min(totalMinor, asked.leftMinor));
  return {
    ok: true,
    totalMinor,
    appliedMinor,
    creditMinor: subtract(totalMinor, appliedMinor),
    changeMinor,
    roundingMinor,
  };
}

function given(asked: PaymentAsked, tender: Tender): Minor {
  return sum(asked.tenders.filter((each) => each.tender === tender).map(({ amountMinor }) => amountMinor));
}

/** What is asked less what comes by other tenders. */
function cashDue(asked: PaymentAsked): Minor {
  const other = asked.tenders.filter(({ tender }) => tender !== 'cash');
  const target = asked.askedMinor ?? asked.leftMinor;
  return minor(Math.max(0, target - sum(other.map(({ amountMinor }) => amountMinor))));
}

function checkTenders(asked: PaymentAsked): PaymentRefusal[] {
  const refusals: PaymentRefusal[] = [];
  if (asked.tenders.length === 0)
    refusals.push({ field: 'tenders', code: 'no_tender', words: 'Name at least one tender.' });
  asked.tenders.forEach(({ tender, amountMinor }, index) => {
    const field = `tenders.${index}.amountMinor`;
    if (amountMinor <= 0) refusals.push({ field, code: 'not_positive', words: 'Must be more than nothing.' });
    if (tender === 'online_card') {
      refusals.push({
        field: `tenders.${index}.tender`,
        code: 'online_at_the_desk',
        words: 'Online card payments come through the card page, not the desk.',
      });
    }
    if (tender === 'cash' && amountMinor % asked.cashStepMinor !== 0) {
      refusals.push({ field, code: 'not_in_cash_steps', words: 'There are no coins for this amount.' });
    }
  });
  return refusals;
}

/** Cash that would all go back, credit that is not there or would only become credit again. */
function checkSums(asked: PaymentAsked): PaymentRefusal[] {
  const refusals: PaymentRefusal[] = [];
  const field = (tender: Tender) =>
    `tenders.${asked.tenders.findIndex((each) => each.tender === tender)}.amountMinor`;
  if (given(asked, 'cash') > 0 && roundToStep(cashDue(asked), asked.cashStepMinor) === 0) {
    const words = 'Without the cash everything is paid; it would all go back as change.';
    refusals.push({ field: field('cash'), code: 'cash_not_needed', words });
  }
  const spent = given(asked, 'credit');
  if (spent > (asked.onAccountMinor ?? ZERO)) {
    const words = 'There is less credit on account than this.';
    refusals.push({ field: field('credit'), code: 'more_than_on_account', words });
  } else if (spent > 0 && spent > asked.leftMinor) {
    const words = 'Less than this is left to pay; credit stays on account.';
    refusals.push({ field: field('credit'), code: 'credit_not_needed', words });
  }
  return refusals;
}

function roundToStep(amount: Minor, step: number): Minor {
  return times(scale(amount, 1, step), step);
}
