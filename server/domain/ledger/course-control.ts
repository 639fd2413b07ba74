import type { Derivation } from '#domain/derivation';
import { add, type Minor, negate, subtract } from '#domain/money/index';

/** What the books and the records of a course say, each from its own source. All amounts as positive sizes. */
export interface CourseTotals {
  /** Credit balance of 2000. */
  readonly liabilityMinor: Minor;
  /** Debit balance of 1130. */
  readonly receivableMinor: Minor;
  /** Applied to the course by receipts that stand. */
  readonly appliedMinor: Minor;
  readonly taxMinor: Minor;
  /** Income of every kind, what cancellations kept included. */
  readonly recognisedMinor: Minor;
  /** Refunds ordered from the course, not those of credit on account. */
  readonly refundsOrderedMinor: Minor;
  readonly disputeLossesMinor: Minor;
  /** Receivables given up (5140): they leave 1130 without being paid. */
  readonly writtenOffMinor: Minor;
}

export interface CourseControl {
  readonly booksMinor: Minor;
  readonly recordsMinor: Minor;
  readonly differenceMinor: Minor;
  readonly why: Derivation;
}

/**
 * The control of a course (invariant 10):
 * 2000 − 1130 = applied − tax − recognised − refunds ordered − dispute losses + written off.
 */
export function courseControl(totals: CourseTotals): CourseControl {
  const booksMinor = subtract(totals.liabilityMinor, totals.receivableMinor);
  const out = [
    { label: 'Tax', amountMinor: negate(totals.taxMinor) },
    { label: 'Recognised as income', amountMinor: negate(totals.recognisedMinor) },
    { label: 'Refunds ordered', amountMinor: negate(totals.refundsOrderedMinor) },
    { label: 'Lost in disputes', amountMinor: negate(totals.disputeLossesMinor) },
    { label: 'Written off', amountMinor: totals.writtenOffMinor },
  ];
  const recordsMinor = out.reduce((total, step) => add(total, step.amountMinor), totals.appliedMinor);
  return {
    booksMinor,
    recordsMinor,
    differenceMinor: subtract(booksMinor, recordsMinor),
    why: {
      title: 'Not ours yet, less owed',
      steps: [
        { label: 'Paid towards the course', amountMinor: totals.appliedMinor },
        ...out.filter((step) => step.amountMinor !== 0),
        { label: 'By the records', amountMinor: recordsMinor },
        { label: 'By the books, 2000 less 1130', amountMinor: booksMinor },
      ],
    },
  };
}
