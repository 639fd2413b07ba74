import type { Laterality } from '#domain/eye';
import { add, applyRate, includedTax, type Minor, subtract } from '#domain/money/index';
import type { ClinicDate } from '#domain/time/index';
import type { WantedCourse } from './check-input.ts';
import type { Refusal, TaxTotal } from './course.ts';
import type { Part } from './part.ts';
import type { DatedRate, TaxClass } from './price-book.ts';

/** The rate of a class on a day, basis points; null before its first rate. */
export function rateOn(taxClass: TaxClass, on: ClinicDate): number | null {
  if (taxClass.treatment === 'exempt') return 0;
  let found: DatedRate | null = null;
  for (const rate of taxClass.rates) {
    if (rate.from <= on && (found === null || rate.from > found.from)) found = rate;
  }
  return found?.rateBp ?? null;
}

/** The day that decides the rate for a column: its eye's surgery (the first for both eyes) or the quote. */
function taxDay(wanted: WantedCourse, taxClass: TaxClass, laterality: Laterality): ClinicDate {
  const { quotedOn } = wanted.input;
  if (taxClass.goesBy === 'quote') return quotedOn;
  const [first, second] = wanted.eyes;
  const eye = second && second.eye === laterality ? second : first;
  return eye?.on ?? quotedOn;
}

/** Works out the tax of every part on what is left of it, rounded half away from zero at the part. */
export function taxParts(wanted: WantedCourse, parts: readonly Part[]): void {
  for (const part of parts) {
    const taxClass = wanted.compiled.taxClasses.get(part.taxClassId);
    const rateBp = taxClass ? (rateOn(taxClass, taxDay(wanted, taxClass, part.laterality)) ?? 0) : 0;
    part.rateBp = rateBp;
    part.withoutTaxMinor = part.netMinor;
    if (rateBp !== 0) {
      const included = taxClass?.stated === 'included';
      part.taxMinor = included ? includedTax(part.netMinor, rateBp) : applyRate(part.netMinor, rateBp);
      if (included) part.withoutTaxMinor = subtract(part.netMinor, part.taxMinor);
    }
    part.payableMinor = add(part.withoutTaxMinor, part.taxMinor);
  }
}

/** Tax classes a course needs and the book does not have, or has no rate for on the day. */
export function taxRefusals(wanted: WantedCourse, parts: readonly Part[]): Refusal[] {
  const refusals: Refusal[] = [];
  const told = new Set<string>();
  for (const { taxClassId, laterality, words } of parts) {
    const taxClass = wanted.compiled.taxClasses.get(taxClassId);
    if (taxClass && rateOn(taxClass, taxDay(wanted, taxClass, laterality)) !== null) continue;
    if (told.has(taxClassId)) continue;
    told.add(taxClassId);
    refusals.push({
      field: 'quotedOn',
      code: 'no_tax_rate',
      words: `The tax class "${taxClass?.label ?? taxClassId}" of ${words.label} has no rate on that day.`,
      change: 'Ask the manager to add the rate to the price book.',
    });
  }
  return refusals;
}

interface Running {
  readonly taxClass: TaxClass;
  readonly rateBp: number;
  net: Minor;
  tax: Minor;
}

/** Totals per class and rate, in the order of the book. */
export function taxTotals(wanted: WantedCourse, parts: readonly Part[]): TaxTotal[] {
  const totals: Running[] = [];
  for (const part of parts) {
    let total = totals.find((each) => each.taxClass.id === part.taxClassId && each.rateBp === part.rateBp);
    if (!total) {
      const taxClass = wanted.compiled.taxClasses.get(part.taxClassId);
      if (!taxClass) continue;
      total = { taxClass, rateBp: part.rateBp, net: 0 as Minor, tax: 0 as Minor };
      totals.push(total);
    }
    total.net = add(total.net, part.withoutTaxMinor);
    total.tax = add(total.tax, part.taxMinor);
  }
  const line = (total: Running) => wanted.compiled.lineOf.get(total.taxClass.id) ?? 0;
  totals.sort((a, b) => line(a) - line(b) || a.rateBp - b.rateBp);
  return totals.map(({ taxClass, rateBp, net, tax }) => ({
    taxClassId: taxClass.id,
    label: taxClass.label,
    treatment: taxClass.treatment,
    stated: taxClass.stated,
    exemptionReason: taxClass.exemptionReason,
    rateBp,
    netMinor: net,
    taxMinor: tax,
    grossMinor: add(net, tax),
  }));
}
