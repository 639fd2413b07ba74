import type { Eye } from '#domain/eye';
import { add, applyRate, type Minor, subtract, sum, ZERO } from '#domain/money/index';
import type { CourseInput, PricedCourse } from './course.ts';

/**
 * What the rules of a price book cost the clinic. For staff only: it is stored beside the book, never inside it, this
 * file is not part of the engine's index, and nothing in a browser may import it.
 */
export interface CostBook {
  /** Licence and consumables of one eye, by procedure. */
  readonly perEyeMinor: Readonly<Record<string, Minor>>;
  /** Of one piece, by add-on. */
  readonly addOnMinor: Readonly<Record<string, Minor>>;
  /** What a lender keeps of the sum it pays out, by payment plan. */
  readonly lender: Readonly<Record<string, { readonly rateBp: number; readonly fixedMinor: Minor }>>;
}

export interface QuoteCosts {
  readonly directMinor: Readonly<Record<Eye, Minor>>;
  readonly addOnsMinor: Minor;
  readonly lenderDiscountMinor: Minor;
  readonly totalMinor: Minor;
  /** Price without tax less these costs. */
  readonly leftMinor: Minor;
}

/** What a priced course costs the clinic. Rules the cost book does not name cost nothing. */
export function quoteCosts(input: CourseInput, course: PricedCourse, costs: CostBook): QuoteCosts {
  const eye = (side: Eye) => costs.perEyeMinor[input.eyes[side]?.procedureId ?? ''] ?? ZERO;
  const directMinor = { OD: eye('OD'), OS: eye('OS') };
  const addOns = course.lines.filter((line) => line.kind === 'add_on');
  const addOnsMinor = sum(addOns.map((line) => costs.addOnMinor[line.ruleId] ?? ZERO));
  const lender = course.schedule.find((due) => due.from === 'lender');
  const terms = costs.lender[input.paymentPlanId ?? ''];
  const lenderDiscountMinor =
    lender && terms ? add(applyRate(lender.amountMinor, terms.rateBp), terms.fixedMinor) : ZERO;
  const totalMinor = sum([directMinor.OD, directMinor.OS, addOnsMinor, lenderDiscountMinor]);
  return {
    directMinor,
    addOnsMinor,
    lenderDiscountMinor,
    totalMinor,
    leftMinor: subtract(course.netMinor, totalMinor),
  };
}
