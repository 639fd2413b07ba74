import { formatAmount } from '#domain/money/index';
import { CYLINDER_LIMIT_MD, POWER_STEP_MD, SPHERE_LIMIT_MD } from '#domain/prescription/index';
import { daysBeforeWords, formatRate } from './explain.ts';
import type {
  AddOn,
  Band,
  Discount,
  EnhancementCover,
  FollowUpSchedule,
  Package,
  PaymentPlan,
  PriceBook,
  PriceList,
  Procedure,
  SecondEyeRule,
  TaxClass,
} from './price-book.ts';

/** What a size meets in a table of bands: a band, no surcharge below the first, or a hole the book does not price. */
export type BandAt = Band | 'below' | 'unpriced';

/** A book made ready for look-ups that do not grow with its number of rules. Made once per version, used often. */
export interface CompiledPriceBook {
  readonly book: PriceBook;
  /** Position of each rule in the book, counted from 1: "price book 7, line 23". */
  readonly lineOf: ReadonlyMap<string, number>;
  readonly taxClasses: ReadonlyMap<string, TaxClass>;
  readonly procedures: ReadonlyMap<string, Procedure>;
  readonly followUps: ReadonlyMap<string, FollowUpSchedule>;
  readonly covers: ReadonlyMap<string, EnhancementCover>;
  readonly addOns: ReadonlyMap<string, AddOn>;
  readonly packages: ReadonlyMap<string, Package>;
  readonly priceLists: ReadonlyMap<string, PriceList>;
  readonly discounts: ReadonlyMap<string, Discount>;
  readonly paymentPlans: ReadonlyMap<string, PaymentPlan>;
  readonly secondEye: ReadonlyMap<string, SecondEyeRule>;
  readonly bands: ReadonlyMap<string, Readonly<Record<Band['measure'], readonly BandAt[]>>>;
  /** Words that are the same for every course of the book. */
  readonly words: { readonly deposit: string; readonly balance: string; readonly moves: string };
}

/** A meridian can be as strong as the largest sphere and cylinder together. */
const STEPS = (SPHERE_LIMIT_MD + CYLINDER_LIMIT_MD) / POWER_STEP_MD + 1;

/** Prepares a book for `quoteCourse`. Never fails: what is missing in a book is refused where it is needed. */
export function compilePriceBook(book: PriceBook): CompiledPriceBook {
  return {
    book,
    lineOf: new Map(ruleIds(book).map((id, index) => [id, index + 1])),
    taxClasses: byId(book.taxClasses),
    procedures: byId(book.procedures),
    followUps: byId(book.followUps),
    covers: byId(book.covers),
    addOns: byId(book.addOns),
    packages: byId(book.packages),
    priceLists: byId(book.priceLists),
    discounts: byId(book.discounts),
    paymentPlans: byId(book.paymentPlans),
    secondEye: new Map(book.secondEye.map((rule) => [pairKey(...rule.procedureIds), rule])),
    bands: compileBands(book),
    words: {
      deposit:
        book.deposit.charge.kind === 'rate'
          ? `deposit, ${formatRate(book.deposit.charge.rateBp)}`
          : 'deposit',
      balance: daysBeforeWords(book.balanceDueDays),
      moves: movesWords(book),
    },
  };
}

function movesWords(book: PriceBook): string {
  const { freeMoves, fee } = book.cancellation.reschedule;
  const cost = fee.kind === 'rate' ? formatRate(fee.rateBp) : formatAmount(fee.amountMinor, book.currency);
  if (freeMoves === 0) return `${cost} an eye`;
  return `${freeMoves === 1 ? 'once' : `${freeMoves} times`} free, then ${cost} an eye`;
}

/** Ids of all rules in the order of the book, which is the order of its lines. */
export function ruleIds(book: PriceBook): string[] {
  return [
    ...book.taxClasses,
    ...book.procedures,
    ...book.bands,
    ...book.secondEye,
    ...book.followUps,
    ...book.covers,
    ...book.addOns,
    ...book.packages,
    ...book.priceLists,
    ...book.discounts,
    book.deposit,
    ...book.paymentPlans,
    book.cancellation,
  ].map((rule) => rule.id);
}

/** One key for a pair of procedures in either order. */
export function pairKey(a: string, b: string): string {
  return a < b ? `${a}\n${b}` : `${b}\n${a}`;
}

/** The band of a procedure that a size belongs to. */
export function bandAt(
  compiled: CompiledPriceBook,
  procedureId: string,
  measure: Band['measure'],
  sizeMd: number,
): BandAt {
  return compiled.bands.get(procedureId)?.[measure][sizeMd / POWER_STEP_MD] ?? 'below';
}

/** True when a size lies between the edges of a band, each edge as the band says. */
export function bandHolds(band: Band, sizeMd: number): boolean {
  const above = band.fromIncluded ? sizeMd >= band.fromMd : sizeMd > band.fromMd;
  if (!above || band.toMd === null) return above;
  return band.toIncluded ? sizeMd <= band.toMd : sizeMd < band.toMd;
}

function byId<Rule extends { readonly id: string }>(rules: readonly Rule[]): ReadonlyMap<string, Rule> {
  return new Map(rules.map((rule) => [rule.id, rule]));
}

function compileBands(book: PriceBook): CompiledPriceBook['bands'] {
  const perProcedure = new Map<string, Record<Band['measure'], Band[]>>();
  for (const band of book.bands) {
    for (const procedureId of band.procedureIds) {
      const bands = perProcedure.get(procedureId) ?? { meridian: [], cylinder: [] };
      bands[band.measure].push(band);
      perProcedure.set(procedureId, bands);
    }
  }
  return new Map(
    [...perProcedure].map(([procedureId, bands]) => [
      procedureId,
      { meridian: tableOf(bands.meridian), cylinder: tableOf(bands.cylinder) },
    ]),
  );
}

/** One entry per quarter of a dioptre; of overlapping bands the first in the book wins (validation names the overlap). */
function tableOf(bands: readonly Band[]): BandAt[] {
  if (bands.length === 0) return [];
  const lowest = Math.min(...bands.map((band) => band.fromMd));
  return Array.from({ length: STEPS }, (_, step): BandAt => {
    const sizeMd = step * POWER_STEP_MD;
    const held = bands.find((band) => bandHolds(band, sizeMd));
    if (held) return held;
    return sizeMd <= lowest ? 'below' : 'unpriced';
  });
}
