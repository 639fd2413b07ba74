import { add, divideHalfAway, type Minor, minor, splitEvenly, ZERO } from '#domain/money/index';
import { addMonths, type ClinicDate } from '#domain/time/index';
import { aprMonthly, toBasisPoints } from './apr.ts';
import type { CreditTerms } from './course.ts';
import type { PaymentPlan } from './price-book.ts';

/** (1 + rate/12)^n as an exact fraction of two whole numbers. */
function growth(rateBp: number, instalments: number): { readonly over: bigint; readonly under: bigint } {
  const n = BigInt(instalments);
  return { over: (120_000n + BigInt(rateBp)) ** n, under: 120_000n ** n };
}

/**
 * The equal monthly instalment that repays a credit with interest: P · i / (1 − (1 + i)^−n), i a twelfth of the
 * nominal yearly rate, rounded half away from zero once.
 */
export function annuityInstalment(creditMinor: Minor, rateBp: number, instalments: number): Minor {
  if (rateBp === 0) return minor(Number(divideHalfAway(BigInt(creditMinor), BigInt(instalments))));
  const { over, under } = growth(rateBp, instalments);
  const numerator = BigInt(creditMinor) * BigInt(rateBp) * over;
  return minor(Number(divideHalfAway(numerator, 120_000n * (over - under))));
}

/**
 * What the credit costs in all: n exact instalments less the credit, rounded half away from zero once, so that a
 * larger credit never costs less in all. The instalments are then an even split of credit and charge.
 */
export function annuityCharge(creditMinor: Minor, rateBp: number, instalments: number): Minor {
  if (rateBp === 0) return ZERO;
  const { over, under } = growth(rateBp, instalments);
  const whole = 120_000n * (over - under);
  const numerator = BigInt(creditMinor) * (BigInt(instalments) * BigInt(rateBp) * over - whole);
  return minor(Number(divideHalfAway(numerator, whole)));
}

/** What paying a credit by a plan looks like to the patient, the first instalment a month after it is agreed. */
export function creditTerms(
  plan: PaymentPlan,
  creditMinor: Minor,
  chargeMinor: Minor,
  agreedOn: ClinicDate,
): CreditTerms {
  const payableMinor = add(creditMinor, chargeMinor);
  const amounts = splitEvenly(payableMinor, plan.instalments);
  return {
    planId: plan.id,
    label: plan.label,
    kind: plan.kind,
    creditMinor,
    chargeMinor,
    payableMinor,
    nominalRateBp: plan.kind === 'interest_free' ? 0 : plan.rateBp,
    aprBp: toBasisPoints(aprMonthly(creditMinor, amounts)),
    instalments: amounts.map((amountMinor, index) => ({
      dueOn: addMonths(agreedOn, index + 1),
      amountMinor,
    })),
  };
}

/**
 * Whether interest-free instalments fall under the exemption of the United Kingdom: at most twelve, all within
 * twelve months beginning with the day of the agreement (article 60F of the Regulated Activities Order, as explained
 * by gateleyplc.com: agreed on 10 September 2015, the twelfth paid on 10 September 2016 is a day too late).
 */
export function isInterestFreeExempt(agreedOn: ClinicDate, dueOn: readonly ClinicDate[]): boolean {
  const tooLate = addMonths(agreedOn, 12);
  return dueOn.length <= 12 && dueOn.every((on) => on < tooLate);
}
