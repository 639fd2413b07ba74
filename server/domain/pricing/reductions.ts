import { applyRate, formatAmount, least, type Minor, splitByWeights, ZERO } from '#domain/money/index';
import { daysBetween } from '#domain/time/index';
import type { ChosenDiscount } from './check-discounts.ts';
import type { WantedCourse } from './check-input.ts';
import { formatRate, type Step } from './explain.ts';
import { chargeOf, type LineWords, type Part, type Reduction, takeOff } from './part.ts';
import { netOf } from './parts.ts';
import type { Package, Scope } from './price-book.ts';

/** Days between the two surgeries, null where a day is missing. */
export function daysApart(wanted: WantedCourse): number | null {
  const [first, second] = wanted.eyes;
  if (!first?.on || !second?.on) return null;
  return daysBetween(first.on, second.on);
}

/** What comes off the second eye and why, or null when nothing applies. */
function secondEyeTerms(wanted: WantedCourse) {
  const rule = wanted.secondEyeRule;
  if (!rule) return null;
  if (!wanted.staged) {
    return rule.sameSession && { off: rule.sameSession, label: 'Second eye on the same day', apart: null };
  }
  const apart = daysApart(wanted);
  if (!rule.staged || apart === null || apart > rule.staged.withinDays) return null;
  return { off: rule.staged.off, label: `Second eye within ${rule.staged.withinDays} days`, apart };
}

/** The second-eye rule, taken off the surgery of the second eye. */
export function reduceSecondEye(wanted: WantedCourse, parts: readonly Part[], into: Reduction[]): void {
  const terms = secondEyeTerms(wanted);
  const second = wanted.eyes[1];
  const part = parts.find((found) => found.words.kind === 'procedure' && found.laterality === second?.eye);
  if (!terms || !wanted.secondEyeRule || !part || !second) return;
  const why: Step[] = [
    { label: 'Second eye', text: second.eye === 'OD' ? 'right' : 'left' },
    {
      label: 'Because it is',
      text: wanted.staged ? 'the later one' : 'the one with the lower price, or either of equals',
    },
  ];
  if (terms.apart !== null) why.push({ label: 'Days apart', text: String(terms.apart) });
  if (terms.off.kind === 'rate')
    why.push({ label: `Off its ${second.procedure.label}`, rateBp: terms.off.rateBp });
  const words = {
    row: 'second-eye',
    kind: 'second_eye',
    ruleId: wanted.secondEyeRule.id,
    label: terms.label,
    detail: terms.off.kind === 'rate' ? formatRate(terms.off.rateBp) : null,
  } as const;
  into.push({ words, part, offMinor: takeOff(part, chargeOf(terms.off, part.grossMinor)), why });
}

/** True for a part that a package includes. */
export function isCovered(part: Part, chosen: Package): boolean {
  const { kind, ruleId } = part.words;
  switch (kind) {
    case 'procedure':
      return true;
    case 'band':
      return chosen.includes.bands;
    case 'aftercare':
      return chosen.includes.aftercare;
    case 'cover':
      return chosen.includes.coverId === ruleId;
    case 'add_on':
      return chosen.includes.addOnIds.includes(ruleId);
    default:
      return false;
  }
}

/** A package priced at a rate off its parts: the rate comes off each of them. */
export function reduceByPackage(chosen: Package, parts: readonly Part[], into: Reduction[]): void {
  if (chosen.price.kind !== 'rate') return;
  const { rateBp } = chosen.price;
  const words = {
    row: `package:${chosen.id}`,
    kind: 'package_rate',
    ruleId: chosen.id,
    label: chosen.label,
    detail: formatRate(rateBp),
  } as const;
  rateOff(
    words,
    rateBp,
    parts.filter((part) => isCovered(part, chosen)),
    into,
  );
}

/** The patient's price list, where it is a rate. */
export function reduceByPriceList(wanted: WantedCourse, parts: readonly Part[], into: Reduction[]): void {
  const list = wanted.priceList;
  if (list?.rule.kind !== 'rate') return;
  const { rateBp, scope } = list.rule;
  const rate = formatRate(rateBp);
  const words = {
    row: `price-list:${list.id}`,
    kind: 'price_list',
    ruleId: list.id,
    label: list.label,
    detail: list.evidence === null ? rate : `${rate}, ${list.evidence}`,
  } as const;
  rateOff(words, rateBp, inScope(parts, scope), into);
}

/** One discount, off what is left of the parts in its scope. */
export function reduceByDiscount(
  wanted: WantedCourse,
  { rule, off }: ChosenDiscount,
  parts: readonly Part[],
  into: Reduction[],
): void {
  const named = (detail: string): LineWords => ({
    row: `discount:${rule.id}`,
    kind: 'discount',
    ruleId: rule.id,
    label: rule.reason,
    detail,
  });
  if (off.kind === 'rate') {
    const scope = rule.off.kind === 'rate' ? rule.off.scope : 'surgery';
    rateOff(named(formatRate(off.rateBp)), off.rateBp, inScope(parts, scope), into);
    return;
  }
  const touched = inScope(parts, 'surgery');
  const most = netOf(touched);
  const amount = least(off.amountMinor, most);
  const words = named(formatAmount(amount, wanted.compiled.book.currency));
  const why: Step[] = [
    { label: 'Off the surgery', amountMinor: amount },
    { label: 'Shared out over', amountMinor: most },
  ];
  const weights = touched.map((part) => part.netMinor);
  const shares = splitByWeights(amount, weights);
  for (const [index, part] of touched.entries()) {
    into.push({ words, part, offMinor: takeOff(part, shares[index] ?? ZERO), why });
  }
}

function rateOff(words: LineWords, rateBp: number, parts: readonly Part[], into: Reduction[]): void {
  const why: Step[] = [{ label: words.label, rateBp }];
  for (const part of parts) {
    const off: Minor = applyRate(part.netMinor, rateBp);
    into.push({ words, part, offMinor: takeOff(part, off), why });
  }
}

function inScope(parts: readonly Part[], scope: Scope): readonly Part[] {
  if (scope === 'everything') return parts;
  if (scope === 'surgery') return parts.filter((part) => part.isSurgery);
  return parts.filter((part) => scope.ruleIds.includes(part.words.ruleId));
}
