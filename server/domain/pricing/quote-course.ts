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
import { columnsOf, linesOf } from './lines.ts';
import { chargeObligation, obligationsOf } from './obligations.ts';
import { newPart, type Part } from './part.ts';
import type { PaymentPlan, PriceBook } from './price-book.ts';
import { type PricedParts, priceParts } from './price-parts.ts';
import { depositOf, scheduleOf } from './schedule.ts';
import { taxParts, taxRefusals, taxTotals } from './taxes.ts';
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
  /** Instalment charge as a part of its own. */
  readonly charge: Part | null;
}

/** Deposit, credit and what the credit costs, by the plan of payment. */
function payingFor(
  wanted: WantedCourse,
  priceMinor: Minor,
): Paying | { readonly ok: false; readonly refusals: Refusal[] } {
  const { plan, compiled, acceptedOn } = wanted;
  const usual = depositOf(compiled.book.deposit, priceMinor);
  if (plan === null) return { ok: true, depositMinor: usual, credit: null, charge: null };
  const depositMinor = plan.takesDeposit ? usual : ZERO;
  const credit = subtract(priceMinor, depositMinor);
  if (priceMinor < plan.leastMinor || credit <= 0) {
    const words = `${plan.label} is for larger sums.`;
    return {
      ok: false,
      refusals: [{ field: 'paymentPlanId', code: 'plan_needs_more', words, change: 'Choose another plan.' }],
    };
  }
  if (plan.kind !== 'fee_bearing') {
    const cost = plan.kind === 'lender' ? annuityCharge(credit, plan.rateBp, plan.instalments) : ZERO;
    return { ok: true, depositMinor, credit: creditTerms(plan, credit, cost, acceptedOn), charge: null };
  }
  const charge = chargePart(plan, annuityCharge(credit, plan.rateBp, plan.instalments));
  const refusals = taxRefusals(wanted, [charge]);
  if (refusals.length > 0) return { ok: false, refusals };
  taxParts(wanted, [charge]);
  return {
    ok: true,
    depositMinor,
    credit: creditTerms(plan, credit, charge.payableMinor, acceptedOn),
    charge,
  };
}

function chargePart(plan: Extract<PaymentPlan, { kind: 'fee_bearing' }>, amountMinor: Minor): Part {
  const words = {
    row: `instalment-charge:${plan.id}`,
    kind: 'instalment_charge',
    ruleId: plan.id,
    label: 'Instalment charge',
    detail: plan.label,
  } as const;
  return newPart(words, 'OU', plan.taxClassId, amountMinor, null, [
    { label: 'Instalments', text: String(plan.instalments) },
    { label: 'Nominal yearly rate', rateBp: plan.rateBp },
  ]);
}

function assemble(
  wanted: WantedCourse,
  before: PricedParts,
  comparison: PricedCourse['package'],
  { depositMinor, credit, charge }: Paying,
): PricedCourse {
  const { input, compiled } = wanted;
  const { book } = compiled;
  const priced = charge ? withCharge(before, charge) : before;
  const taxes = taxTotals(wanted, priced.parts);
  const { columns, shares } = columnsOf(priced);
  const schedule = scheduleOf(wanted, depositMinor, priced.totalMinor, shares, credit);
  return {
    engine: ENGINE_VERSION,
    book: { id: book.id, version: book.version, inForceFrom: book.inForceFrom },
    currency: book.currency,
    standing: standingOf(wanted),
    quotedOn: input.quotedOn,
    validUntil: validUntil(input.quotedOn, book.validityDays),
    lines: linesOf(priced, compiled),
    columns,
    shares,
    taxes,
    netMinor: sum(taxes.map((tax) => tax.netMinor)),
    taxMinor: sum(taxes.map((tax) => tax.taxMinor)),
    totalMinor: priced.totalMinor,
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
  };
}

function withCharge(before: PricedParts, charge: Part): PricedParts {
  return {
    parts: before.parts.concat(charge),
    reductions: before.reductions,
    promises: before.promises,
    totalMinor: add(before.totalMinor, charge.payableMinor),
    packageWeights: before.packageWeights,
  };
}

/** The ladder keeps a share of the price, never of what credit would have cost. */
function withoutCharge(shares: ByColumn, charge: Part | null): ByColumn {
  return charge ? { OD: shares.OD, OS: shares.OS, OU: subtract(shares.OU, charge.payableMinor) } : shares;
}

function promised(wanted: WantedCourse, before: PricedParts, charge: Part | null): Obligation[] {
  let withoutTax = ZERO;
  for (const part of before.parts) withoutTax = add(withoutTax, part.withoutTaxMinor);
  const obligations = obligationsOf(wanted, before.promises, withoutTax);
  if (charge) obligations.push(chargeObligation(charge));
  return obligations;
}

/** What the hash of a quote is made of: engine, version of the book, input. The same key, the same course. */
export function contentKey(input: CourseInput, book: Pick<PriceBook, 'id' | 'version'>): string {
  return canonicalJson({ engine: ENGINE_VERSION, book: { id: book.id, version: book.version }, input });
}
