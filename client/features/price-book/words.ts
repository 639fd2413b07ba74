import { type CurrencyCode, formatAmount, type Minor } from '#domain/money/index';
import { formatDioptres } from '#domain/prescription/index';
import {
  type Band,
  type Charge,
  type Discount,
  type EnhancementCover,
  formatRate,
  type PaymentPlan,
  type PriceBook,
  type Scope,
  type SecondEyeRule,
  type TaxClass,
} from '#domain/pricing/index';
import { formatDay } from '#domain/time/index';

/** The rules of a price book in words, for people who read it rather than compute with it. */

export const PER = { eye: 'per eye', session: 'per session', course: 'per course' } as const;

/** "150.00" or "10 %". */
export function chargeWords(charge: Charge, currency: CurrencyCode): string {
  return charge.kind === 'rate' ? formatRate(charge.rateBp) : formatAmount(charge.amountMinor, currency);
}

/** "1.50 to under 3.00", "over 6.00 to 8.00", "12.00 and over": each edge says whether it belongs. */
export function edgeWords(band: Band): string {
  const from = `${band.fromIncluded ? '' : 'over '}${formatDioptres(band.fromMd)}`;
  if (band.toMd === null) return `${from} and over`;
  return `${from} to ${band.toIncluded ? '' : 'under '}${formatDioptres(band.toMd)}`;
}

export function measureWords(measure: Band['measure']): string {
  return measure === 'cylinder' ? 'Cylinder' : 'Strongest meridian';
}

/** Names of rules in the order given; an id the book does not have stays an id. */
export function namesOf(
  rules: readonly { readonly id: string; readonly label: string }[],
  ids: readonly string[],
): string {
  return ids.map((id) => rules.find((rule) => rule.id === id)?.label ?? id).join(', ');
}

/** "every procedure" where that is shorter. */
export function procedureWords(book: PriceBook, ids: readonly string[]): string {
  const all = book.procedures.every((procedure) => ids.includes(procedure.id));
  return all && ids.length === book.procedures.length ? 'every procedure' : namesOf(book.procedures, ids);
}

export function secondEyeWords(rule: SecondEyeRule): string {
  if (rule.ifNever === null) return 'not said';
  return rule.ifNever.kind === 'supplement'
    ? 'a supplement is added to the first'
    : 'the first keeps its price';
}

export function scopeWords(scope: Scope, book: PriceBook): string {
  if (scope === 'everything') return 'everything';
  if (scope === 'surgery') return 'surgery, its surcharges and packages';
  const rules = [...book.procedures, ...book.addOns, ...book.covers, ...book.followUps, ...book.packages];
  return namesOf(rules, scope.ruleIds);
}

export function taxWords(tax: TaxClass): string {
  if (tax.treatment === 'exempt') return tax.exemptionReason ?? 'exempt, no reason given';
  const rates = tax.rates.map((rate) => `${formatRate(rate.rateBp)} from ${formatDay(rate.from)}`);
  return `${rates.join(', ')}; ${tax.stated} in the price, by the day of ${tax.goesBy === 'quote' ? 'the quote' : 'surgery'}`;
}

export function coverWords(cover: EnhancementCover): readonly string[] {
  const threshold = formatDioptres(cover.thresholdMd);
  const of = {
    spherical_equivalent: 'spherical equivalent',
    cylinder: 'cylinder',
    either: 'spherical equivalent or cylinder',
  }[cover.thresholdOf];
  return [
    `for ${cover.months} months from surgery, from month ${cover.earliestMonth}`,
    cover.countPerEye === 1 ? 'once per eye' : `${cover.countPerEye} times per eye`,
    `at ${threshold} D or more, ${of}`,
    ...(cover.examinationEveryMonths === null
      ? []
      : [`with an examination every ${cover.examinationEveryMonths} months`]),
  ];
}

/** "up to 5 %, with approval 15 %". */
export function limitWords(discount: Discount, currency: CurrencyCode): string {
  const { off } = discount;
  const [own, approver] =
    off.kind === 'rate'
      ? [formatRate(off.ownLimitBp), formatRate(off.approverLimitBp)]
      : [formatAmount(off.ownLimitMinor, currency), formatAmount(off.approverLimitMinor, currency)];
  return own === approver ? `up to ${own}` : `up to ${own}, with another person’s approval ${approver}`;
}

export function planWords(plan: PaymentPlan): string {
  const months = `${plan.instalments} monthly instalments`;
  if (plan.kind === 'interest_free') return `${months}, no charge`;
  return plan.kind === 'lender'
    ? `${months} to a lender at ${formatRate(plan.rateBp)} a year`
    : `${months} at ${formatRate(plan.rateBp)} a year`;
}

export function rungWords(minDaysBefore: number): string {
  if (minDaysBefore === 0) return 'on the day of surgery';
  return minDaysBefore === 1
    ? '1 day or more before surgery'
    : `${minDaysBefore} days or more before surgery`;
}

const SECTIONS: Readonly<Record<string, string>> = {
  taxClasses: 'Tax',
  procedures: 'Procedures',
  bands: 'Surcharges',
  secondEye: 'Second eye',
  followUps: 'Aftercare',
  covers: 'Enhancement cover',
  addOns: 'Add-ons',
  packages: 'Packages',
  priceLists: 'Price lists',
  discounts: 'Discounts',
  paymentPlans: 'Ways to pay',
  deposit: 'Deposit',
  balanceDueDays: 'Balance due',
  cancellation: 'If it is cancelled',
  validityDays: 'Validity of a quote',
  allocationPolicy: 'Recognition',
  notIncluded: 'Not included',
  inForceFrom: 'In force from',
  currency: 'Currency',
};

/** A section of the book as its heading says it. */
export function sectionWords(section: string): string {
  return SECTIONS[section] ?? section;
}

/** A member's value as a person compares it: money with its minor units, rates in per cent, powers in dioptres. */
export function valueWords(path: string, value: unknown, currency: CurrencyCode): string {
  if (value === undefined || value === null) return 'none';
  if (typeof value === 'number') {
    if (path.endsWith('Minor')) return formatAmount(value as Minor, currency);
    if (path.endsWith('Bp')) return formatRate(value);
    if (path.endsWith('Md')) return `${formatDioptres(value)} D`;
    return String(value);
  }
  if (typeof value === 'boolean') return value ? 'yes' : 'no';
  if (typeof value === 'string') return value;
  return JSON.stringify(value);
}

/** "charge.amountMinor" as "charge amount". */
export function pathWords(path: string): string {
  return path
    .split('.')
    .map((part) =>
      part
        .replace(/(Minor|Bp|Md|Id|Ids)$/, '')
        .replace(/([A-Z])/g, ' $1')
        .toLowerCase(),
    )
    .join(' ')
    .trim();
}
