import { type Minor, subtract, sum } from '#domain/money/index';

/** Totals of one course, each counted from its own records and not from the ledger. */
export interface CourseTotals {
  /** Receipts that stand, towards the price. */
  readonly appliedMinor: Minor;
  /** Tax made due by deliveries. */
  readonly taxMinor: Minor;
  /** Income recognised, tax aside. */
  readonly recognisedMinor: Minor;
  readonly refundsOrderedMinor: Minor;
  readonly disputeLossesMinor: Minor;
}

/**
 * What 2000 less 1130 of a course must be (as a credit balance): applied − tax − recognised − refunds ordered − dispute
 * losses. Holds after every commit (invariant 10).
 */
export function courseControl(totals: CourseTotals): Minor {
  return subtract(
    totals.appliedMinor,
    sum([totals.taxMinor, totals.recognisedMinor, totals.refundsOrderedMinor, totals.disputeLossesMinor]),
  );
}
