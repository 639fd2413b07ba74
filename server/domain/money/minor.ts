/**
 * Money as a whole number of minor units (cents, pence, fils). Never a float, never a fraction.
 * The currency travels beside it; two amounts are added only within one currency.
 */
export type Minor = number & { readonly __minor: true };

/** Zero of any currency. */
export const ZERO = 0 as Minor;

/** Brands a whole number as money. Throws RangeError for fractions, NaN and beyond 2^53 − 1. */
export function minor(value: number): Minor {
  if (!Number.isSafeInteger(value)) throw new RangeError(`Not a whole number of minor units: ${value}`);
  return (value === 0 ? 0 : value) as Minor;
}

/** a + b, refused beyond the safe range. */
export function add(a: Minor, b: Minor): Minor {
  return minor(a + b);
}

/** a − b. */
export function subtract(a: Minor, b: Minor): Minor {
  return minor(a - b);
}

/** −a. */
export function negate(a: Minor): Minor {
  return minor(-a);
}

/** Sum of any number of amounts; zero of none. */
export function sum(amounts: Iterable<Minor>): Minor {
  let total = 0;
  for (const amount of amounts) total += amount;
  return minor(total);
}

/** The smaller of two amounts. */
export function least(a: Minor, b: Minor): Minor {
  return a < b ? a : b;
}

/** The larger of two amounts. */
export function greatest(a: Minor, b: Minor): Minor {
  return a > b ? a : b;
}

/** a × n for a whole number n (units of an item, eyes, visits). */
export function times(a: Minor, n: number): Minor {
  if (!Number.isSafeInteger(n)) throw new RangeError(`Not a whole number of times: ${n}`);
  return minor(a * n);
}

/** numerator / denominator, halves away from zero, in exact integers. */
export function divideHalfAway(numerator: bigint, denominator: bigint): bigint {
  if (denominator === 0n) throw new RangeError('Division by zero');
  const negative = numerator < 0n !== denominator < 0n;
  const n = numerator < 0n ? -numerator : numerator;
  const d = denominator < 0n ? -denominator : denominator;
  const quotient = (2n * n + d) / (2n * d);
  return negative ? -quotient : quotient;
}

/** amount × numerator / denominator, halves away from zero. */
export function scale(amount: Minor, numerator: number, denominator: number): Minor {
  const doubled = 2 * amount * numerator;
  if (denominator > 0 && Math.abs(doubled) + denominator < Number.MAX_SAFE_INTEGER) {
    const size = Math.abs(doubled) + denominator;
    const quotient = (size - (size % (2 * denominator))) / (2 * denominator);
    return minor(doubled < 0 ? -quotient : quotient);
  }
  return minor(Number(divideHalfAway(BigInt(amount) * BigInt(numerator), BigInt(denominator))));
}

/** A rate in basis points: 10 000 is the whole, 1 is a hundredth of a per cent. */
export type BasisPoints = number;

/** amount × rate, rounded half away from zero at the line (the house rule for tax and rates). */
export function applyRate(amount: Minor, rateBp: BasisPoints): Minor {
  return scale(amount, rateBp, 10_000);
}

/** The tax contained in a tax-inclusive amount: amount × rate / (1 + rate), half away from zero. */
export function includedTax(gross: Minor, rateBp: BasisPoints): Minor {
  return scale(gross, rateBp, 10_000 + rateBp);
}
