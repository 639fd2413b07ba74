import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { divideHalfAway, minor, scale, splitByWeights, splitEvenly, sum } from '#domain/money/index';

describe('splitByWeights', () => {
  test('left-over units · go to the largest remainders · KPMG 20/30/40 over 80', () => {
    expect(splitByWeights(minor(80), [20, 30, 40])).toEqual([18, 27, 35]);
  });
  test('twelve parts · of 4,990.00 · four of 415.84 and eight of 415.83', () => {
    expect(splitEvenly(minor(499_000), 12)).toEqual([...Array(4).fill(41_584), ...Array(8).fill(41_583)]);
  });
  test('nothing can carry · a non-zero amount · is refused', () => {
    expect(() => splitByWeights(minor(1), [0, 0])).toThrow(RangeError);
    expect(() => splitByWeights(minor(1), [0.5])).toThrow(RangeError);
  });
  test('any split · of either sign · adds up and strays less than one unit (invariant 12)', () => {
    fc.assert(
      fc.property(
        fc.integer({ min: -1e12, max: 1e12 }),
        fc.array(fc.integer({ min: 0, max: 1e9 }), { minLength: 1, maxLength: 20 }),
        (amount, weights) => {
          const whole = weights.reduce((a, b) => a + b, 0);
          fc.pre(whole > 0);
          const parts = splitByWeights(minor(amount), weights);
          expect(sum(parts)).toBe(amount);
          parts.forEach((part, i) => {
            const exact = (BigInt(amount) * BigInt(weights[i] ?? 0) * 1000n) / BigInt(whole);
            const off = BigInt(part) * 1000n - exact;
            expect(off <= 1000n && off >= -1000n).toBe(true);
          });
        },
      ),
      { numRuns: 1000 },
    );
  });
});

test('amounts and weights beyond plain numbers · are split and scaled as exactly', () => {
  const huge = minor(9_000_000_000_000_001);
  expect(splitByWeights(huge, [1, 1])).toEqual([4_500_000_000_000_001, 4_500_000_000_000_000]);
  expect(splitByWeights(minor(-7), [3_000_000_000_000_000, 1_000_000_000_000_000])).toEqual([-5, -2]);
  fc.assert(
    fc.property(fc.integer({ min: -1e9, max: 1e9 }), fc.integer({ min: 1, max: 30_000 }), (amount, rate) => {
      const exact = divideHalfAway(BigInt(amount) * BigInt(rate), 10_000n);
      expect(scale(minor(amount), rate, 10_000)).toBe(Number(exact));
      expect(scale(minor(amount), rate * 1e9, 10_000 * 1e9)).toBe(Number(exact));
    }),
    { numRuns: 1000 },
  );
});
