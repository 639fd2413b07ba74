import type { Derivation, DerivationStep } from '#domain/derivation';
import {
  add,
  applyRate,
  greatest,
  least,
  type Minor,
  negate,
  subtract,
  sum,
  ZERO,
} from '#domain/money/index';
import { formatRate } from '#domain/pricing/index';
import type { ClinicDate } from '#domain/time/index';
import type { MonthlyGuarantee, WithholdingRule } from './agreement.ts';

export interface Withheld {
  /** What of this statement tax is withheld on. */
  readonly baseMinor: Minor;
  readonly withheldMinor: Minor;
  readonly why: Derivation;
}

/**
 * What is withheld from a statement, dated by its issue. With a threshold nothing is withheld until the tax year's fees
 * pass it (reaching it is not passing it); then of the whole year, or of the excess. Fees that were taxed are not taxed
 * again, and what was withheld is not given back within a statement: later fees are taxed that much later.
 *
 * @param year fees of the tax year before this statement, and how much of them was taxed already
 */
export function withhold(
  rules: readonly WithholdingRule[],
  issuedOn: ClinicDate,
  feesMinor: Minor,
  year: { readonly feesMinor: Minor; readonly taxedMinor: Minor },
): Withheld {
  const title = 'Withheld';
  const rule = rules.filter(({ from }) => from <= issuedOn).at(-1);
  if (!rule)
    return { baseMinor: ZERO, withheldMinor: ZERO, why: { title, steps: [], note: 'Nothing is withheld.' } };
  const together = add(year.feesMinor, feesMinor);
  const threshold = rule.yearlyThresholdMinor;
  const over = threshold === null || together > threshold;
  const taxable = !over
    ? ZERO
    : threshold !== null && rule.onceOver === 'excess'
      ? subtract(together, threshold)
      : together;
  const baseMinor = greatest(subtract(taxable, year.taxedMinor), ZERO);
  const withheldMinor = applyRate(baseMinor, rule.rateBp);
  return {
    baseMinor,
    withheldMinor,
    why: {
      title,
      steps: [
        { label: 'Fees of the tax year before', amountMinor: year.feesMinor },
        { label: 'Fees of this statement', amountMinor: feesMinor },
        ...(threshold === null
          ? []
          : [{ label: over ? 'Threshold passed' : 'Threshold not passed', amountMinor: threshold }]),
        ...(year.taxedMinor > 0 ? [{ label: 'Taxed before', amountMinor: negate(year.taxedMinor) }] : []),
        { label: 'Taxed now', amountMinor: baseMinor },
        {
          label: formatRate(rule.rateBp),
          amountMinor: withheldMinor,
          rule: 'withholding',
          version: `since ${rule.from}`,
        },
      ],
    },
  };
}

export interface GuaranteeOutcome {
  /** Added to the month's fees. */
  readonly topUpMinor: Minor;
  /** Taken from the month's fees for what was added before, as a positive amount. */
  readonly recoveredMinor: Minor;
  /** Still to be recovered from later months. */
  readonly carriedMinor: Minor;
}

/**
 * The minimum guarantee of a month: a month below it is filled up; where the shortfall is carried, months above it pay back
 * what was filled up before, never falling below the guarantee themselves.
 *
 * @param carriedMinor still to be recovered from months before
 */
export function guaranteeOf(
  guarantee: MonthlyGuarantee,
  earnedMinor: Minor,
  carriedMinor: Minor,
): GuaranteeOutcome {
  const topUpMinor = greatest(subtract(guarantee.leastMinor, earnedMinor), ZERO);
  if (guarantee.shortfall === 'forgiven') return { topUpMinor, recoveredMinor: ZERO, carriedMinor: ZERO };
  const above = greatest(subtract(earnedMinor, guarantee.leastMinor), ZERO);
  const recoveredMinor = least(above, carriedMinor);
  return {
    topUpMinor,
    recoveredMinor,
    carriedMinor: add(subtract(carriedMinor, recoveredMinor), topUpMinor),
  };
}

/** A row of a statement: positive earns, negative takes back. */
export interface StatementRow {
  readonly kind: 'surgery' | 'enhancement' | 'clawback' | 'adjustment' | 'guarantee';
  readonly amountMinor: Minor;
}

export interface StatementTotals {
  readonly openingMinor: Minor;
  readonly byKind: Readonly<
    Record<StatementRow['kind'], { readonly rows: number; readonly amountMinor: Minor }>
  >;
  /** All rows together: what withholding looks at. */
  readonly feesMinor: Minor;
  readonly withheldMinor: Minor;
  readonly paidMinor: Minor;
  readonly closingMinor: Minor;
  readonly why: Derivation;
}

const ROW_WORDS: Readonly<Record<StatementRow['kind'], readonly [string, string]>> = {
  surgery: ['eye', 'eyes'],
  enhancement: ['enhancement', 'enhancements'],
  clawback: ['clawed back', 'clawed back'],
  adjustment: ['adjustment', 'adjustments'],
  guarantee: ['guarantee', 'guarantee'],
};

/** Adds up a statement: closing = opening + rows − withheld − paid. Below zero the payee owes it. */
export function statementTotals(what: {
  readonly openingMinor: Minor;
  readonly rows: readonly StatementRow[];
  readonly withheldMinor: Minor;
  readonly paidMinor: Minor;
}): StatementTotals {
  const { openingMinor, rows, withheldMinor, paidMinor } = what;
  const of = (kind: StatementRow['kind']) => {
    const mine = rows.filter((row) => row.kind === kind);
    return { rows: mine.length, amountMinor: sum(mine.map((row) => row.amountMinor)) };
  };
  const byKind = {
    surgery: of('surgery'),
    enhancement: of('enhancement'),
    clawback: of('clawback'),
    adjustment: of('adjustment'),
    guarantee: of('guarantee'),
  };
  const feesMinor = sum(rows.map((row) => row.amountMinor));
  const closingMinor = sum([openingMinor, feesMinor, negate(withheldMinor), negate(paidMinor)]);
  const counted = Object.entries(byKind).filter(([, { rows: count }]) => count > 0);
  const steps: DerivationStep[] = [
    { label: 'Brought forward', amountMinor: openingMinor },
    ...counted.map(([kind, { rows: count, amountMinor }]) => ({
      label: `${count} ${ROW_WORDS[kind as StatementRow['kind']][count === 1 ? 0 : 1]}`,
      amountMinor,
    })),
    ...(withheldMinor === 0 ? [] : [{ label: 'Withheld', amountMinor: negate(withheldMinor) }]),
    ...(paidMinor === 0 ? [] : [{ label: 'Paid', amountMinor: negate(paidMinor) }]),
    { label: 'Closing', amountMinor: closingMinor },
  ];
  const why = { title: 'Closing', steps };
  return { openingMinor, byKind, feesMinor, withheldMinor, paidMinor, closingMinor, why };
}
