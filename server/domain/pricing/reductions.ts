import { applyRate, formatAmount, type Minor, minor, splitByWeights, sum } from '#domain/money/index';
import type { ChosenDiscount } from './check-discounts.ts';
import type { WantedCourse } from './check-input.ts';
import { formatRate } from './explain.ts';
import {
  chargeOf,
  daysApart,
  moneyStep,
  type Part,
  type Reduction,
  ruleStep,
  takeOff,
  textStep,
} from './parts.ts';
import type { Package, Scope } from './price-book.ts';

/** Why the second eye costs less, or null when nothing applies. */
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
export function secondEyeReductions(wanted: WantedCourse, parts: readonly Part[]): Reduction[] {
  const terms = secondEyeTerms(wanted);
  const second = wanted.eyes[1];
  const part = parts.find((found) => found.kind === 'procedure' && found.laterality === second?.eye);
  if (!terms || !wanted.secondEyeRule || !part || !second) return [];
  const fromMinor = part.netMinor;
  const offMinor = takeOff(part, chargeOf(terms.off, part.grossMinor));
  const why = [textStep('Second eye', second.eye === 'OD' ? 'right' : 'left')];
  why.push(
    textStep(
      'Because it is',
      wanted.staged ? 'the later one' : 'the one with the lower price, or either of equals',
    ),
  );
  if (terms.apart !== null) why.push(textStep('Days apart', String(terms.apart)));
  if (terms.off.kind === 'rate') {
    why.push({
      label: `Off its ${second.procedure.label}`,
      value: { kind: 'rate', rateBp: terms.off.rateBp },
    });
    why.push(moneyStep('Of', part.grossMinor));
  }
  return [
    {
      row: 'second-eye',
      kind: 'second_eye',
      ruleId: wanted.secondEyeRule.id,
      label: terms.label,
      detail: terms.off.kind === 'rate' ? formatRate(terms.off.rateBp) : null,
      part,
      fromMinor,
      offMinor,
      why: [...why, ruleStep(wanted, wanted.secondEyeRule.id)],
    },
  ];
}

/** True for a part that a package includes. */
export function isCovered(part: Part, chosen: Package): boolean {
  switch (part.kind) {
    case 'procedure':
      return true;
    case 'band':
      return chosen.includes.bands;
    case 'aftercare':
      return chosen.includes.aftercare;
    case 'cover':
      return chosen.includes.coverId === part.ruleId;
    case 'add_on':
      return chosen.includes.addOnIds.includes(part.ruleId);
    default:
      return false;
  }
}

/** A package priced at a rate off its parts: the rate comes off each of them. */
export function packageReductions(
  wanted: WantedCourse,
  chosen: Package,
  parts: readonly Part[],
): Reduction[] {
  if (chosen.price.kind !== 'rate') return [];
  const { rateBp } = chosen.price;
  const what = {
    row: `package:${chosen.id}`,
    kind: 'package_rate',
    ruleId: chosen.id,
    label: chosen.label,
  } as const;
  const covered = parts.filter((part) => isCovered(part, chosen));
  return rateOff(wanted, { ...what, detail: formatRate(rateBp) }, rateBp, covered);
}

/** The patient's price list, where it is a rate. */
export function priceListReductions(wanted: WantedCourse, parts: readonly Part[]): Reduction[] {
  const list = wanted.priceList;
  if (list?.rule.kind !== 'rate') return [];
  const { rateBp, scope } = list.rule;
  const rate = formatRate(rateBp);
  const detail = list.evidence === null ? rate : `${rate}, ${list.evidence}`;
  const what = {
    row: `price-list:${list.id}`,
    kind: 'price_list',
    ruleId: list.id,
    label: list.label,
  } as const;
  return rateOff(
    wanted,
    { ...what, detail },
    rateBp,
    parts.filter((part) => inScope(part, scope)),
  );
}

/** One discount, off what is left of the parts in its scope. */
export function discountReductions(
  wanted: WantedCourse,
  { rule, off }: ChosenDiscount,
  parts: readonly Part[],
): Reduction[] {
  const what = { row: `discount:${rule.id}`, kind: 'discount', ruleId: rule.id, label: rule.reason } as const;
  if (off.kind === 'rate') {
    const scope = rule.off.kind === 'rate' ? rule.off.scope : 'surgery';
    const touched = parts.filter((part) => inScope(part, scope));
    return rateOff(wanted, { ...what, detail: formatRate(off.rateBp) }, off.rateBp, touched);
  }
  const touched = parts.filter((part) => part.isSurgery);
  const most = sum(touched.map((part) => part.netMinor));
  const amount = minor(Math.min(off.amountMinor, most));
  const detail = formatAmount(amount, wanted.compiled.book.currency);
  const shares = splitByWeights(
    amount,
    touched.map((part) => part.netMinor),
  );
  return touched.map((part, index) =>
    reduce(part, shares[index] ?? minor(0), { ...what, detail }, [
      moneyStep('Off the surgery', amount),
      moneyStep('Shared out over', most),
      ruleStep(wanted, rule.id),
    ]),
  );
}

type What = Pick<Reduction, 'row' | 'kind' | 'ruleId' | 'label' | 'detail'>;

function rateOff(wanted: WantedCourse, what: What, rateBp: number, parts: readonly Part[]): Reduction[] {
  const why = [
    { label: what.label, value: { kind: 'rate', rateBp } as const },
    ruleStep(wanted, what.ruleId),
  ];
  return parts.map((part) => reduce(part, applyRate(part.netMinor, rateBp), what, why));
}

function reduce(part: Part, off: Minor, what: What, why: Reduction['why']): Reduction {
  const fromMinor = part.netMinor;
  return { ...what, part, fromMinor, offMinor: takeOff(part, off), why };
}

function inScope(part: Part, scope: Scope): boolean {
  if (scope === 'everything') return true;
  if (scope === 'surgery') return part.isSurgery;
  return scope.ruleIds.includes(part.ruleId);
}
