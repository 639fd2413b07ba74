import { describe, expect, test } from 'vitest';
import { minor } from '#domain/money/index';
import { allocateByStandAlone, allocateResidual, allocateWithBundle } from '#domain/obligations/index';

const cents = (...euros: number[]) => euros.map((each) => minor(Math.round(each * 100)));
const whole = (...units: number[]) => units.map((each) => minor(each));

describe('allocation by relative stand-alone price', () => {
  test('50 / 25 / 75 over 100.00 · IFRS 15 Example 33, ASC 606-10-55-256 (from memory)', () => {
    expect(allocateByStandAlone(minor(10_000), whole(50, 25, 75))).toEqual(cents(33.33, 16.67, 50));
  });
  test('20 / 30 / 40 over 80 whole units · KPMG revenue handbook, p. 105', () => {
    expect(allocateByStandAlone(minor(80), whole(20, 30, 40))).toEqual([18, 27, 35]);
  });
  test('100 and an option worth 50 × 30 % × 80 % = 12 · IFRS 15 Example 49 (facts in EY’s guide, result from memory)', () => {
    expect(allocateByStandAlone(minor(10_000), cents(100, 12))).toEqual(cents(89.29, 10.71));
  });
  test('97 of 100 units kept at 100 · IFRS 15 Example 22 (IE110–112)', () => {
    expect(allocateByStandAlone(minor(10_000), whole(97, 3))).toEqual([9_700, 300]);
  });
});

describe('a discount that belongs to a bundle', () => {
  test('second and third regularly sell together at 60 · IFRS 15 Example 34 case A (from memory)', () => {
    const bundle = { members: [1, 2], priceMinor: minor(6_000) };
    expect(allocateWithBundle(minor(10_000), cents(40, 55, 45), bundle)).toEqual(cents(40, 33, 27));
  });
  test('a price the bundle does not explain · is allocated over all · IFRS 15.81', () => {
    const bundle = { members: [1, 2], priceMinor: minor(6_000) };
    expect(allocateWithBundle(minor(9_000), cents(40, 55, 45), bundle)).toEqual(
      allocateByStandAlone(minor(9_000), cents(40, 55, 45)),
    );
  });
});

describe('a residual', () => {
  // The bundle of 34 A first, the fourth product has no price of its own and was seen at 15 to 45.
  const observed = { leastMinor: minor(1_500) };
  test('130.00 less 40 / 33 / 27 leaves 30 · IFRS 15 Example 34 case B (from memory)', () => {
    expect(allocateResidual(minor(13_000), cents(40, 33, 27), observed)).toEqual({
      ok: true,
      allocated: cents(40, 33, 27, 30),
    });
  });
  test('105.00 would leave 5 · IFRS 15 Example 34 case C (from memory): not allowed', () => {
    expect(allocateResidual(minor(10_500), cents(40, 33, 27), observed)).toEqual({
      ok: false,
      why: 'residual_too_small',
    });
    expect(allocateResidual(minor(10_000), cents(40, 33, 27), observed).ok).toBe(false);
  });
});
