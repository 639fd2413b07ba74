import { currencyCode, type Minor } from '#domain/money/index';
import { type CashCount, denominationsOf } from '#domain/tills/index';

/** The fewest notes and coins that make an amount of euros: what a tidy till holds. */
export function cashCountOf(amount: Minor): CashCount {
  const count: Record<string, number> = {};
  let left: number = amount;
  for (const { valueMinor } of denominationsOf(currencyCode('EUR'))) {
    const pieces = Math.floor(left / valueMinor);
    if (pieces > 0) count[String(valueMinor)] = pieces;
    left -= pieces * valueMinor;
  }
  return count;
}
