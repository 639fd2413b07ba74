/**
 * Surgeon fees against figures from outside. Sources:
 * - shared care: Medicare's global surgery rules as published by Palmetto GBA (palmettogba.com): post-operative care is
 *   20 % of the global fee for eye surgery, split by the days of the 90-day period. The fee of 900.00 is ours.
 * - withholding: India, Income-tax Act 1961, section 194J, professional fees: 10 %, nothing up to 30,000 rupees a year,
 *   from 1 April 2025 up to 50,000. That the whole sum is taxed once the year passes the threshold: from memory.
 * - volume bands: own arithmetic, 400 an eye for 1–20, 450 for 21–40, 500 after.
 */
import { describe, expect, test } from 'vitest';
import { bandFee, bandTotal, shareFee, type WithholdingRule, withhold } from '#domain/fees/index';
import { minor, sum } from '#domain/money/index';
import { clinicDate } from '#domain/time/index';

const whole = (units: number) => minor(units * 100);

describe('volume bands · own arithmetic', () => {
  const bands = [
    { fromEye: 1, perEyeMinor: whole(400) },
    { fromEye: 21, perEyeMinor: whole(450) },
    { fromEye: 41, perEyeMinor: whole(500) },
  ];
  test.each([
    [47, 'marginal', 20_500],
    [47, 'whole', 23_500],
    [21, 'marginal', 8_450],
    [21, 'whole', 9_450],
  ] as const)('%i eyes, %s reading · earn %i', (eyes, reading, expected) => {
    expect(bandTotal(bands, reading, eyes)).toBe(whole(expected));
    const oneByOne = Array.from({ length: eyes }, (_, before) => bandFee(bands, reading, before));
    expect(sum(oneByOne)).toBe(whole(expected));
  });
});

describe('withholding · India, section 194J', () => {
  const rules: WithholdingRule[] = [
    {
      from: clinicDate('2024-04-01'),
      rateBp: 1_000,
      yearlyThresholdMinor: whole(30_000),
      onceOver: 'whole_year',
    },
    {
      from: clinicDate('2025-04-01'),
      rateBp: 1_000,
      yearlyThresholdMinor: whole(50_000),
      onceOver: 'whole_year',
    },
  ];
  test.each([
    ['2025-03-31', 40_000, 0, 0, 4_000],
    ['2025-04-01', 40_000, 0, 0, 0],
    ['2025-03-31', 30_000, 0, 0, 0],
    ['2025-06-30', 50_000, 0, 0, 0],
    ['2025-06-30', 50_001, 0, 0, 5_000.1],
    ['2025-07-31', 20_000, 40_000, 0, 6_000],
    ['2025-08-31', 25_000, 60_000, 60_000, 2_500],
  ])(
    'on %s, fees %i after %i in the year of which %i were taxed · withholds %f',
    (on, fees, before, taxed, expected) => {
      const { withheldMinor } = withhold(rules, clinicDate(on), whole(fees), {
        feesMinor: whole(before),
        taxedMinor: whole(taxed),
      });
      expect(withheldMinor).toBe(Math.round(expected * 100));
    },
  );
});

describe('shared care · Medicare, 20 % by days of 90', () => {
  const terms = { careRateBp: 2_000, days: 90 };
  test.each([
    ['all by the surgeon', 0, 900, 0],
    ['all by another provider', 90, 720, 180],
    ['from the 15th day on by another provider', 76, 748, 152],
  ])('%s', (_, days, surgeon, provider) => {
    const periods = days === 0 ? [] : [{ payeeId: 9, fromDay: 91 - days, toDay: 90 }];
    const shared = shareFee(whole(900), terms, periods);
    expect(
      shared.ok && [shared.surgeonMinor, sum(shared.providers.map(({ amountMinor }) => amountMinor))],
    ).toEqual([whole(surgeon), whole(provider)]);
  });
});
