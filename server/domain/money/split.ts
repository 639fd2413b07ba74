import { type Minor, minor, ZERO } from './minor.ts';

/**
 * Splits an amount over weights so that the parts add up to it exactly.
 * Each part is first rounded towards zero; the units left over go one each to the largest remainders,
 * ties to the earlier part. (Largest-remainder method, Hamilton; KPMG's revenue handbook needs it for its
 * 20/30/40 example, where half-up gives 81 of 80.)
 *
 * @param amount what is split, of either sign
 * @param weights non-negative whole numbers, at least one above zero unless amount is zero
 * @returns one part per weight, in order
 * @throws RangeError on a negative or fractional weight, or when nothing can carry a non-zero amount
 */
export function splitByWeights(amount: Minor, weights: readonly number[]): Minor[] {
  for (const weight of weights) {
    if (!Number.isSafeInteger(weight) || weight < 0) throw new RangeError(`Not a weight: ${weight}`);
  }
  const small = splitSmall(amount, weights);
  if (small) return small;
  const whole = weights.reduce((total, weight) => total + BigInt(weight), 0n);
  if (whole === 0n) {
    if (amount === 0) return weights.map(() => ZERO);
    throw new RangeError('Nothing to split over: every weight is zero');
  }
  const sign = amount < 0 ? -1n : 1n;
  const size = BigInt(amount) * sign;
  const parts = weights.map((weight, index) => {
    const product = size * BigInt(weight);
    return { index, units: product / whole, remainder: product % whole };
  });
  let left = size - parts.reduce((total, part) => total + part.units, 0n);
  const byRemainder = [...parts].sort((a, b) =>
    a.remainder === b.remainder ? a.index - b.index : a.remainder > b.remainder ? -1 : 1,
  );
  for (const part of byRemainder) {
    if (left === 0n) break;
    part.units += 1n;
    left -= 1n;
  }
  return parts.map((part) => minor(Number(part.units * sign)));
}

/** The same in plain numbers, where every product is exact in them: the everyday case, ten times as fast. */
function splitSmall(amount: Minor, weights: readonly number[]): Minor[] | null {
  let whole = 0;
  let largest = 0;
  for (const weight of weights) {
    whole += weight;
    if (weight > largest) largest = weight;
  }
  const size = Math.abs(amount);
  if (whole === 0 || size * largest > Number.MAX_SAFE_INTEGER || whole > Number.MAX_SAFE_INTEGER) return null;
  const units: number[] = [];
  const remainders: number[] = [];
  let left = size;
  for (const weight of weights) {
    const product = size * weight;
    const remainder = product % whole;
    const part = (product - remainder) / whole;
    units.push(part);
    remainders.push(remainder);
    left -= part;
  }
  for (; left > 0; left -= 1) {
    let best = 0;
    for (let index = 1; index < remainders.length; index += 1) {
      if ((remainders[index] ?? 0) > (remainders[best] ?? 0)) best = index;
    }
    units[best] = (units[best] ?? 0) + 1;
    remainders[best] = -1;
  }
  return units.map((part) => minor(amount < 0 ? -part : part));
}

/**
 * Splits an amount into n parts as equal as can be; the larger parts come first.
 * 4,990.00 in twelve: 4 × 415.84 and 8 × 415.83.
 */
export function splitEvenly(amount: Minor, n: number): Minor[] {
  if (!Number.isSafeInteger(n) || n < 1) throw new RangeError(`Not a number of parts: ${n}`);
  const size = Math.abs(amount);
  const larger = size % n;
  const part = (size - larger) / n;
  const sign = amount < 0 ? -1 : 1;
  const parts: Minor[] = [];
  for (let index = 0; index < n; index += 1) parts.push(minor(sign * (index < larger ? part + 1 : part)));
  return parts;
}
