import type { Laterality } from '#domain/eye';
import { add, applyRate, includedTax, type Minor, minor, subtract, sum, ZERO } from '#domain/money/index';
import type { ClinicDate } from '#domain/time/index';
import type { WantedCourse } from './check-input.ts';
import type { QuoteLine, Refusal, TaxTotal } from './course.ts';
import { moneyStep, type Part, ruleStep, textStep } from './parts.ts';
import type { TaxClass } from './price-book.ts';

/** A part with its tax, worked out once on what is left of it. payable = net + tax. */
export interface TaxedPart extends Part {
  readonly taxClass: TaxClass | null;
  readonly rateBp: number;
  readonly taxMinor: Minor;
  readonly withoutTaxMinor: Minor;
  readonly payableMinor: Minor;
}

/** The rate of a class on a day; null before its first rate. */
export function rateOn(taxClass: TaxClass, on: ClinicDate): number | null {
  if (taxClass.treatment === 'exempt') return 0;
  let found: { readonly from: ClinicDate; readonly rateBp: number } | null = null;
  for (const rate of taxClass.rates) {
    if (rate.from <= on && (found === null || rate.from > found.from)) found = rate;
  }
  return found?.rateBp ?? null;
}

/** The day that decides the rate for a column: its eye's surgery (the first for both eyes) or the quote. */
function taxDay(wanted: WantedCourse, taxClass: TaxClass, laterality: Laterality): ClinicDate {
  const { quotedOn } = wanted.input;
  if (taxClass.goesBy === 'quote') return quotedOn;
  const eye = laterality === 'OU' ? wanted.eyes[0] : wanted.eyes.find((each) => each.eye === laterality);
  return eye?.on ?? quotedOn;
}

/** Tax of every part, rounded half away from zero at the part. */
export function taxParts(wanted: WantedCourse, parts: readonly Part[]): TaxedPart[] {
  return parts.map((part) => {
    const taxClass = wanted.compiled.taxClasses.get(part.taxClassId) ?? null;
    const rateBp = taxClass ? (rateOn(taxClass, taxDay(wanted, taxClass, part.laterality)) ?? 0) : 0;
    const included = taxClass?.stated === 'included';
    const taxMinor =
      rateBp === 0 ? ZERO : included ? includedTax(part.netMinor, rateBp) : applyRate(part.netMinor, rateBp);
    const withoutTaxMinor = included ? subtract(part.netMinor, taxMinor) : part.netMinor;
    return {
      ...part,
      taxClass,
      rateBp,
      taxMinor,
      withoutTaxMinor,
      payableMinor: add(withoutTaxMinor, taxMinor),
    };
  });
}

/** Tax classes a course needs and the book does not have, or has no rate for on the day. */
export function taxRefusals(wanted: WantedCourse, parts: readonly Part[]): Refusal[] {
  const missing = new Set<string>();
  return parts.flatMap((part) => {
    const taxClass = wanted.compiled.taxClasses.get(part.taxClassId);
    if (taxClass && rateOn(taxClass, taxDay(wanted, taxClass, part.laterality)) !== null) return [];
    if (missing.has(part.taxClassId)) return [];
    missing.add(part.taxClassId);
    return [
      {
        field: 'quotedOn',
        code: 'no_tax_rate' as const,
        words: `The tax class "${taxClass?.label ?? part.taxClassId}" of ${part.label} has no rate on that day.`,
        change: 'Ask the manager to add the rate to the price book.',
      },
    ];
  });
}

/** Totals per class and rate, in the order of the book. */
export function taxTotals(wanted: WantedCourse, parts: readonly TaxedPart[]): TaxTotal[] {
  const groups = new Map<string, TaxedPart[]>();
  for (const part of parts) {
    const key = `${part.taxClassId} ${part.rateBp}`;
    const group = groups.get(key);
    if (group) group.push(part);
    else groups.set(key, [part]);
  }
  const order = (id: string) => wanted.compiled.lineOf.get(id) ?? 0;
  return [...groups.values()]
    .flatMap((group) => (group[0]?.taxClass ? [totalOf(group[0].taxClass, group[0].rateBp, group)] : []))
    .sort((a, b) => order(a.taxClassId) - order(b.taxClassId) || a.rateBp - b.rateBp);
}

function totalOf(taxClass: TaxClass, rateBp: number, parts: readonly TaxedPart[]): TaxTotal {
  return {
    taxClassId: taxClass.id,
    label: taxClass.label,
    treatment: taxClass.treatment,
    stated: taxClass.stated,
    exemptionReason: taxClass.exemptionReason,
    rateBp,
    netMinor: sum(parts.map((part) => part.withoutTaxMinor)),
    taxMinor: sum(parts.map((part) => part.taxMinor)),
    grossMinor: sum(parts.map((part) => part.payableMinor)),
  };
}

/** Lines for tax that the prices do not include, one per class, rate and column. */
export function taxLines(wanted: WantedCourse, parts: readonly TaxedPart[]): QuoteLine[] {
  const lines = new Map<string, { line: QuoteLine; amount: number }>();
  for (const part of parts) {
    if (!part.taxClass || part.taxClass.stated === 'included' || part.taxMinor === 0) continue;
    const row = `tax:${part.taxClassId}:${part.rateBp}`;
    const id = `${row}:${part.laterality}`;
    const found = lines.get(id);
    const step = moneyStep(part.detail ?? part.label, part.taxMinor);
    const why = [
      ...(found?.line.why.slice(0, -1) ?? [rateStep(part.rateBp)]),
      step,
      ruleStep(wanted, part.taxClassId),
    ];
    const amount = (found?.amount ?? 0) + part.taxMinor;
    lines.set(id, {
      amount,
      line: {
        id,
        row,
        kind: 'tax',
        ruleId: part.taxClassId,
        label: part.taxClass.label,
        detail: null,
        laterality: part.laterality,
        amountMinor: minor(amount),
        taxClassId: null,
        why,
      },
    });
  }
  return [...lines.values()].map(({ line }) => line);
}

function rateStep(rateBp: number) {
  return rateBp === 0
    ? textStep('Rate', 'none')
    : { label: 'Rate', value: { kind: 'rate' as const, rateBp } };
}
