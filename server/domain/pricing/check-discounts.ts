import { formatAmount, type Minor } from '#domain/money/index';
import type { Refuse } from './check-input.ts';
import type { CompiledPriceBook } from './compile.ts';
import type { CourseInput, DiscountWish } from './course.ts';
import { formatRate } from './explain.ts';
import type { Discount } from './price-book.ts';

/** A discount of the book with the size that was asked for. */
export interface ChosenDiscount {
  readonly rule: Discount;
  readonly off: DiscountWish['off'];
  readonly overOwnLimit: boolean;
}

/** The discounts asked for, in the order of the book: the order they are taken off in. */
export function checkDiscounts(
  input: CourseInput,
  compiled: CompiledPriceBook,
  refuse: Refuse,
): ChosenDiscount[] {
  const groups = new Map<string, Discount>();
  const list = input.priceListId === null ? undefined : compiled.priceLists.get(input.priceListId);
  const chosen = input.discounts.flatMap((wish, index) => {
    const field = `discounts.${index}`;
    const rule = compiled.discounts.get(wish.discountId);
    if (!rule) {
      const words = `The price book has no discount "${wish.discountId}".`;
      refuse(field, 'unknown_rule', words, 'Choose a discount of this book.');
      return [];
    }
    const clash = groups.get(rule.stackingGroup);
    if (clash || list?.combinesWithDiscounts === false) {
      const words = `${rule.reason} does not combine with ${clash?.reason ?? list?.label}.`;
      refuse(field, 'discounts_do_not_combine', words, 'Keep one of the two.');
    }
    groups.set(rule.stackingGroup, rule);
    const size = checkSize(rule, wish, field, compiled, refuse);
    return size ? [size] : [];
  });
  return chosen.sort((a, b) => (compiled.lineOf.get(a.rule.id) ?? 0) - (compiled.lineOf.get(b.rule.id) ?? 0));
}

function checkSize(
  rule: Discount,
  wish: DiscountWish,
  field: string,
  compiled: CompiledPriceBook,
  refuse: Refuse,
): ChosenDiscount | null {
  const limits = limitsOf(rule);
  const asked = wish.off.kind === 'rate' ? wish.off.rateBp : wish.off.amountMinor;
  if (wish.off.kind !== rule.off.kind) {
    const words = `${rule.reason} is ${rule.off.kind === 'rate' ? 'a rate' : 'an amount'}.`;
    refuse(
      `${field}.off`,
      'discount_kind',
      words,
      `Give ${rule.off.kind === 'rate' ? 'a rate' : 'an amount'}.`,
    );
    return null;
  }
  if (!Number.isSafeInteger(asked) || asked <= 0 || asked > limits.approver) {
    const most = discountSize(rule, limits.approver, compiled);
    const words = `${rule.reason} of ${discountSize(rule, asked, compiled)} is beyond what anybody may give.`;
    refuse(`${field}.off`, 'discount_over_limit', words, `Give more than nothing and at most ${most}.`);
    return null;
  }
  return { rule, off: wish.off, overOwnLimit: asked > limits.own };
}

/** Own and approver's limit, basis points or minor units. */
export function limitsOf(rule: Discount): { readonly own: number; readonly approver: number } {
  return rule.off.kind === 'rate'
    ? { own: rule.off.ownLimitBp, approver: rule.off.approverLimitBp }
    : { own: rule.off.ownLimitMinor, approver: rule.off.approverLimitMinor };
}

/** A discount's size in figures: "4 %" or "100.00". */
export function discountSize(rule: Discount, size: number, compiled: CompiledPriceBook): string {
  if (!Number.isSafeInteger(size)) return String(size);
  return rule.off.kind === 'rate' ? formatRate(size) : formatAmount(size as Minor, compiled.book.currency);
}
