import { pmt } from 'financial';
import { describe, expect, test } from 'vitest';
import { minor, splitEvenly } from '#domain/money/index';
import {
  annuityCharge,
  annuityInstalment,
  aprByDays,
  aprMonthly,
  aprUnitPeriods,
  isInterestFreeExempt,
  toBasisPoints,
} from '#domain/pricing/index';
import { addMonths, clinicDate } from '#domain/time/index';

/** n equal payments, the first after some unit-periods and a fraction. */
function level(amount: number, n: number, firstUnits: number, fraction: number) {
  return Array.from({ length: n }, (_, k) => ({ amount, units: firstUnits + k, fraction }));
}

describe('APR by unit-periods · 12 CFR 1026 Appendix J (c)(1)', () => {
  test('5,000 · 24 monthly of 230 · 9.69 %', () => {
    expect(toBasisPoints(aprUnitPeriods(5_000, level(230, 24, 1, 0), 12))).toBe(969);
  });
  test('6,000 · 36 monthly of 200, the first after a month and 19/30 · 11.82 %', () => {
    expect(toBasisPoints(aprUnitPeriods(6_000, level(200, 36, 1, 19 / 30), 12))).toBe(1_182);
  });
  test('10,000 · 40 quarterly of 385, the first after a quarter and 39/90 · 8.97 %', () => {
    expect(toBasisPoints(aprUnitPeriods(10_000, level(385, 40, 1, 39 / 90), 4))).toBe(897);
  });
  test('500 · 30 weekly of 17.60, the first after four weeks and 4/7 · 14.96 %', () => {
    expect(toBasisPoints(aprUnitPeriods(500, level(17.6, 30, 4, 4 / 7), 52))).toBe(1_496);
  });
  test('payments that do not repay the advance · are refused', () => {
    expect(() => aprUnitPeriods(1_000, level(10, 12, 1, 0), 12)).toThrow(RangeError);
  });
});

describe('APR of the European Union', () => {
  test('1,000 on 1 January 1994, 1,200 on 1 July 1995 · COM(1996) 79 · 12.96 %', () => {
    const rate = aprByDays(1_000, clinicDate('1994-01-01'), [
      { on: clinicDate('1995-07-01'), amount: 1_200 },
    ]);
    expect(toBasisPoints(rate)).toBe(1_296);
  });
  test('a yearly rate of i a month · compounds · (1 + i)^12 − 1 (Directive 2008/48/EC, Annex I)', () => {
    const monthly = annuityInstalment(minor(1_000_000_000), 1_200, 12);
    expect(toBasisPoints(aprMonthly(1_000_000_000, Array(12).fill(monthly)))).toBe(1_268);
  });
  test('no charge · no rate', () => {
    expect(aprMonthly(499_000, splitEvenly(minor(499_000), 12))).toBe(0);
  });
});

describe('annuity (own figures; checked against the package financial)', () => {
  const cases: readonly [credit: number, rateBp: number, n: number, instalment: number][] = [
    [1_000_000, 990, 24, 46_099],
    [100_000, 1_200, 12, 8_885],
    [412_345, 1_499, 36, -1],
    [99_999, 50, 7, -1],
  ];
  for (const [credit, rateBp, n, expected] of cases) {
    test(`${credit / 100} at ${rateBp / 100} % in ${n}`, () => {
      const theirs = -pmt(rateBp / 120_000, n, credit);
      const ours = annuityInstalment(minor(credit), rateBp, n);
      expect(ours).toBe(Math.round(theirs));
      if (expected > 0) expect(ours).toBe(expected);
      expect(annuityCharge(minor(credit), rateBp, n)).toBe(Math.round(theirs * n - credit));
    });
  }
});

test('0 % split · 4,990.00 in twelve (own) · 4 × 415.84 and 8 × 415.83', () => {
  expect(splitEvenly(minor(499_000), 12)).toEqual([...Array(4).fill(41_584), ...Array(8).fill(41_583)]);
});

describe('interest-free exemption of the United Kingdom · gateleyplc.com', () => {
  const agreed = clinicDate('2015-09-10');
  const monthly = (from: number, n: number) =>
    Array.from({ length: n }, (_, k) => addMonths(agreed, from + k));
  test('agreed 10 September 2015, the twelfth on 10 September 2016 · is a day too late', () => {
    expect(isInterestFreeExempt(agreed, monthly(1, 12))).toBe(false);
    expect(isInterestFreeExempt(agreed, [...monthly(1, 11), clinicDate('2016-09-09')])).toBe(true);
  });
  test('a thirteenth instalment · is one too many', () => {
    const days = Array.from({ length: 13 }, () => clinicDate('2015-12-01'));
    expect(isInterestFreeExempt(agreed, days)).toBe(false);
  });
});
