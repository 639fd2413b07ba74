import { type ClinicDate, daysBetween } from '#domain/time/index';

/**
 * Annual percentage rates. Rates are fractions of one (0.0969 is 9.69 %), amounts of any one unit.
 * The unknown is found by halving an interval, with nothing but + − × ÷ where time is counted in whole periods,
 * so that every engine finds the same bits.
 */

/** A payment some whole unit-periods and a fraction of one after the credit. */
export interface UnitPayment {
  readonly amount: number;
  readonly units: number;
  readonly fraction: number;
}

/**
 * APR by 12 CFR 1026 Appendix J (United States): one advance, payments counted in unit-periods,
 * discounted by (1 + f·i)(1 + i)^t; the rate is i times the number of unit-periods in a year.
 *
 * @throws RangeError when the payments do not repay the advance
 */
export function aprUnitPeriods(
  advance: number,
  payments: readonly UnitPayment[],
  unitPeriodsPerYear: number,
): number {
  const worth = (i: number) =>
    payments.reduce(
      (sum, { amount, units, fraction }) => sum + amount / ((1 + fraction * i) * power(1 + i, units)),
      0,
    );
  return (
    solve(
      worth,
      advance,
      payments.reduce((sum, { amount }) => sum + amount, 0),
    ) * unitPeriodsPerYear
  );
}

/**
 * APR by Directive 2008/48/EC, Annex I: the yearly rate X with Σ C / (1 + X)^t equal on both sides, t in years.
 * Here time is counted in equal months of a twelfth, the k-th repayment falling k months after the credit.
 *
 * @throws RangeError when the repayments do not repay the credit
 */
export function aprMonthly(credit: number, repayments: readonly number[]): number {
  const worth = (i: number) => {
    const factor = 1 / (1 + i);
    let sum = 0;
    for (let k = repayments.length - 1; k >= 0; k -= 1) sum = (sum + (repayments[k] ?? 0)) * factor;
    return sum;
  };
  const monthly = solve(
    worth,
    credit,
    repayments.reduce((sum, amount) => sum + amount, 0),
  );
  return power(1 + monthly, 12) - 1;
}

/** The same equation for repayments on any day, a year being 365 days. */
export function aprByDays(
  credit: number,
  drawnOn: ClinicDate,
  repayments: readonly { readonly on: ClinicDate; readonly amount: number }[],
): number {
  const flows = repayments.map(({ on, amount }) => ({ years: daysBetween(drawnOn, on) / 365, amount }));
  const worth = (rate: number) =>
    flows.reduce((sum, { years, amount }) => sum + amount / (1 + rate) ** years, 0);
  return solve(
    worth,
    credit,
    repayments.reduce((sum, { amount }) => sum + amount, 0),
  );
}

/** A rate in basis points, halves up. */
export function toBasisPoints(rate: number): number {
  return Math.floor(rate * 10_000 + 0.5);
}

/** base to a whole power by squaring; Math.pow may differ between engines in the last bit. */
function power(base: number, exponent: number): number {
  let result = 1;
  let square = base;
  for (let rest = exponent; rest > 0; rest = Math.floor(rest / 2)) {
    if (rest % 2 === 1) result *= square;
    square *= square;
  }
  return result;
}

/** The rate at which a falling worth equals the credit; 0 when nothing is charged. */
function solve(worth: (rate: number) => number, credit: number, undiscounted: number): number {
  if (undiscounted < credit) throw new RangeError('The payments do not repay the credit');
  if (undiscounted === credit) return 0;
  let low = 0;
  let high = 1;
  while (worth(high) > credit) {
    high *= 2;
    if (high > 1e9) throw new RangeError('No rate is high enough');
  }
  for (let step = 0; step < 80; step += 1) {
    const middle = (low + high) / 2;
    if (worth(middle) > credit) low = middle;
    else high = middle;
  }
  return (low + high) / 2;
}
