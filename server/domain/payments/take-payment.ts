import { add, type Minor, minor, subtract, sum, ZERO } from '#domain/money/index';
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
  /** Smallest cash step of the currency in minor units (5 where there are no one- and two-cent coins); 1 rounds nothing. */
  readonly cashStepMinor: number;
}

export type PaymentRefusalCode = 'no_tender' | 'not_positive' | 'online_at_the_desk' | 'not_in_cash_steps';

export type PaymentTaken =
  | {
      readonly ok: true;
      readonly totalMinor: Minor;
      readonly appliedMinor: Minor;
      readonly creditMinor: Minor;
      readonly changeMinor: Minor;
      /** Positive: the clinic forgives it; negative: the patient pays it. */
      readonly roundingMinor: Minor;
    }
  | {
      readonly ok: false;
      readonly refusals: readonly {
        readonly field: string;
        readonly code: PaymentRefusalCode;
        readonly words: string;
      }[];
    };

/**
 * Splits what was handed over: towards the price, change out of cash, and what is beyond it and cannot be change, as credit on
 * account. With a cash step the last of the price paid in cash is rounded to the step, halves away from zero.
 */
export function takePayment(asked: PaymentAsked): PaymentTaken {
  const refusals = checkTenders(asked);
  if (refusals.length > 0) return { ok: false, refusals };
  const cash = sum(
    asked.tenders.filter((given) => given.tender === 'cash').map((given) => given.amountMinor),
  );
  const other = sum(
    asked.tenders.filter((given) => given.tender !== 'cash').map((given) => given.amountMinor),
  );
  const cashDue = minor(Math.max(0, asked.leftMinor - other));
  const roundedDue = roundToStep(cashDue, asked.cashStepMinor);
  const settlesInCash = cash > 0 && cashDue > 0 && cash >= roundedDue;
  const changeMinor = cash > 0 ? minor(Math.max(0, cash - Math.max(0, roundedDue))) : ZERO;
  const roundingMinor = settlesInCash ? subtract(cashDue, roundedDue) : ZERO;
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

function checkTenders(asked: PaymentAsked) {
  const refusals: { field: string; code: PaymentRefusalCode; words: string }[] = [];
  if (asked.tenders.length === 0)
    refusals.push({ field: 'tenders', code: 'no_tender', words: 'Name at least one tender.' });
  asked.tenders.forEach((given, index) => {
    const field = `tenders.${index}.amountMinor`;
    if (given.amountMinor <= 0)
      refusals.push({ field, code: 'not_positive', words: 'Must be more than nothing.' });
    if (given.tender === 'online_card') {
      refusals.push({
        field: `tenders.${index}.tender`,
        code: 'online_at_the_desk',
        words: 'Online card payments come through the card page, not the desk.',
      });
    }
    if (given.tender === 'cash' && given.amountMinor % asked.cashStepMinor !== 0) {
      refusals.push({ field, code: 'not_in_cash_steps', words: 'There are no coins for this amount.' });
    }
  });
  return refusals;
}

function roundToStep(amount: Minor, step: number): Minor {
  return minor(Math.floor((amount + step / 2) / step) * step);
}
