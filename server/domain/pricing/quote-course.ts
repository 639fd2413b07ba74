import { add, type Minor, subtract, sum, ZERO } from '#domain/money/index';
import { canonicalJson } from './canonical-json.ts';
import { checkInput, type WantedCourse } from './check-input.ts';
import { type CompiledPriceBook, compilePriceBook } from './compile.ts';
import type {
  ByColumn,
  CourseInput,
  CreditTerms,
  Obligation,
  PricedCourse,
  QuoteResult,
  Refusal,
} from './course.ts';
import { coverTerms } from './cover.ts';
import { annuityCharge, creditTerms } from './credit.ts';
import { cancellationRows } from './ladder.ts';
import { obligationsOf } from './obligations.ts';
import { type Part, ruleStep, textStep } from './parts.ts';
import type { PaymentPlan, PriceBook } from './price-book.ts';
import { columnsOf, inReadingOrder, linesOf, type PricedParts, priceParts } from './price-parts.ts';
import { depositOf, scheduleOf } from './schedule.ts';
import { type TaxedPart, taxLines, taxParts, taxRefusals, taxTotals } from './taxes.ts';
import { approvalsOf, includedOf, notIncludedOf, standingOf, validUntil, warningsOf } from './terms.ts';

/** Changes whenever the same input and book could give other bytes; part of every content key. */
export const ENGINE_VERSION = 'pricing-1';

/**
 * Prices a course for one or both eyes, or says what to change. Pure: the same input, book and engine give the same
 * bytes for ever (invariant 13), and neither cylinder notation nor swapping the eyes moves the total (invariant 14).
 * Compile a book once and pass that where many courses are priced.
 */
export function quoteCourse(input: CourseInput, book: PriceBook | CompiledPriceBook): QuoteResult {
  const compiled = 'lineOf' in book ? book : compilePriceBook(book);
  const checked = checkInput(input, compiled);
  if (!checked.ok) return checked;
  const { wanted } = checked;
  const { priced, comparison } = priceParts(wanted);
  const taxless = taxRefusals(wanted, priced.parts);
  if (taxless.length > 0) return { ok: false, refusals: taxless };
  const paying = payingFor(wanted, priced.totalMinor);
  if (!paying.ok) return paying;
  return { ok: true, course: assemble(wanted, priced, comparison, paying) };
}

interface Paying {
  readonly ok: true;
  readonly depositMinor: Minor;
  readonly credit: CreditTerms | null;
  /** Instalment charge as a line of its own. */
  readonly charge: TaxedPart | null;
}

/** Deposit, credit and what the credit costs, by the plan of payment. */
function payingFor(
  wanted: WantedCourse,
  priceMinor: Minor,
): Paying | { readonly ok: false; readonly refusals: Refusal[] } {
  const { plan, compiled } = wanted;
  const usual = depositOf(compiled.book.deposit, priceMinor);
  if (plan === null) return { ok: true, depositMinor: usual, credit: null, charge: null };
  const depositMinor = plan.takesDeposit ? usual : ZERO;
  const credit = subtract(priceMinor, depositMinor);
  if (priceMinor < plan.leastMinor || credit <= 0) {
    const words = `${plan.label} is for larger sums.`;
    const refusal = {
      field: 'paymentPlanId',
      code: 'plan_needs_more' as const,
      words,
      change: 'Choose another plan.',
    };
    return { ok: false, refusals: [refusal] };
  }
  if (plan.kind !== 'fee_bearing') {
    const chargeMinor = plan.kind === 'lender' ? annuityCharge(credit, plan.rateBp, plan.instalments) : ZERO;
    return {
      ok: true,
      depositMinor,
      credit: creditTerms(plan, credit, chargeMinor, wanted.acceptedOn),
      charge: null,
    };
  }
  const part = chargePart(wanted, plan, annuityCharge(credit, plan.rateBp, plan.instalments));
  const refusals = taxRefusals(wanted, [part]);
  if (refusals.length > 0) return { ok: false, refusals };
  const charge = taxParts(wanted, [part])[0] ?? null;
  const chargeMinor = charge?.payableMinor ?? ZERO;
  return {
    ok: true,
    depositMinor,
    credit: creditTerms(plan, credit, chargeMinor, wanted.acceptedOn),
    charge,
  };
}

function chargePart(
  wanted: WantedCourse,
  plan: Extract<PaymentPlan, { kind: 'fee_bearing' }>,
  amountMinor: Minor,
): Part {
  return {
    row: `instalment-charge:${plan.id}`,
    kind: 'instalment_charge',
    ruleId: plan.id,
    label: 'Instalment charge',
    detail: plan.label,
    laterality: 'OU',
    taxClassId: plan.taxClassId,
    grossMinor: amountMinor,
    netMinor: amountMinor,
    promise: null,
    isSurgery: false,
    why: [
      textStep('Instalments', String(plan.instalments)),
      { label: 'Nominal yearly rate', value: { kind: 'rate', rateBp: plan.rateBp } },
      ruleStep(wanted, plan.id),
    ],
  };
}

function assemble(
  wanted: WantedCourse,
  before: PricedParts,
  comparison: PricedCourse['package'],
  { depositMinor, credit, charge }: Paying,
): PricedCourse {
  const { input, compiled } = wanted;
  const { book } = compiled;
  const priced = charge ? { ...before, parts: [...before.parts, charge] } : before;
  const totalMinor = add(before.totalMinor, charge?.payableMinor ?? ZERO);
  const taxes = taxTotals(wanted, priced.parts);
  const { columns, shares } = columnsOf(priced);
  const schedule = scheduleOf(wanted, depositMinor, totalMinor, shares, credit);
  return {
    engine: ENGINE_VERSION,
    book: { id: book.id, version: book.version, inForceFrom: book.inForceFrom },
    currency: book.currency,
    standing: standingOf(wanted),
    quotedOn: input.quotedOn,
    validUntil: validUntil(input.quotedOn, book.validityDays),
    lines: inReadingOrder([...linesOf(priced), ...taxLines(wanted, priced.parts)], compiled.lineOf),
    columns,
    shares,
    taxes,
    netMinor: sum(taxes.map((tax) => tax.netMinor)),
    taxMinor: sum(taxes.map((tax) => tax.taxMinor)),
    totalMinor,
    depositMinor,
    schedule,
    credit,
    obligations: promised(wanted, before, charge),
    cancellation: cancellationRows(wanted, withoutCharge(shares, charge), schedule),
    cover: coverTerms(wanted),
    included: includedOf(wanted),
    notIncluded: notIncludedOf(wanted),
    package: comparison,
    approvals: approvalsOf(wanted),
    warnings: warningsOf(wanted, comparison, credit),
    contentKey: contentKey(input, book),
  };
}

/** The ladder keeps a share of the price, never of what credit would have cost. */
function withoutCharge(shares: ByColumn, charge: TaxedPart | null): ByColumn {
  return charge ? { ...shares, OU: subtract(shares.OU, charge.payableMinor) } : shares;
}

function promised(wanted: WantedCourse, before: PricedParts, charge: TaxedPart | null): Obligation[] {
  const withoutTax = sum(before.parts.map((part) => part.withoutTaxMinor));
  const obligations = obligationsOf(wanted, before.promises, withoutTax);
  if (!charge) return obligations;
  const amountMinor = charge.withoutTaxMinor;
  const id = 'instalment-charge';
  const common = { id, label: charge.label, laterality: 'OU' } as const;
  return [
    ...obligations,
    {
      ...common,
      kind: 'instalment_charge',
      standAloneMinor: amountMinor,
      allocatedMinor: amountMinor,
      parts: [{ ...common, amountMinor }],
    },
  ];
}

/** What a course's hash is made of: engine, version of the book, input. */
export function contentKey(input: CourseInput, book: Pick<PriceBook, 'id' | 'version'>): string {
  return canonicalJson({ engine: ENGINE_VERSION, book: { id: book.id, version: book.version }, input });
}
