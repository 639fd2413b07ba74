import { describe, expect, test } from 'vitest';
import { type EnhancementAsked, type EnhancementCover, priceEnhancement } from '#domain/pricing/index';
import { clinicDate } from '#domain/time/index';
import { eur, goldenBook } from '#tests/factories/golden-book';
import { rx } from '#tests/factories/prescriptions';

const [cover] = goldenBook.covers as [EnhancementCover];
const asked: EnhancementAsked = {
  askedOn: clinicDate('2027-02-01'),
  surgeryOn: clinicDate('2026-04-16'),
  residual: rx('-0.50 -0.25 x 90'),
  used: 0,
  examinedOn: [clinicDate('2026-10-01')],
  carriedRateBp: 0,
};

const CASES: readonly [what: string, change: Partial<EnhancementAsked>, unmet: string[]][] = [
  ['within all conditions', {}, []],
  ['on the first day of month three', { askedOn: clinicDate('2026-07-16') }, []],
  ['a day before it', { askedOn: clinicDate('2026-07-15') }, ['not_before']],
  [
    'on the last day of cover',
    { askedOn: clinicDate('2028-04-16'), examinedOn: [clinicDate('2027-04-16')] },
    [],
  ],
  [
    'a day after it',
    { askedOn: clinicDate('2028-04-17'), examinedOn: [clinicDate('2027-04-17')] },
    ['not_after', 'examinations'],
  ],
  ['a second time', { used: 1 }, ['count']],
  ['with next to nothing left', { residual: rx('-0.25 DS') }, ['threshold']],
  ['with the equivalent at the threshold', { residual: rx('-0.25 -0.50 x 90') }, []],
  ['with a mixed rest whose cylinder counts', { residual: rx('+0.25 -0.50 x 90') }, []],
  ['in the other notation', { residual: rx('-0.25 +0.50 x 180') }, []],
  ['without the yearly examination', { askedOn: clinicDate('2027-04-17'), examinedOn: [] }, ['examinations']],
  [
    'with an examination too late',
    { askedOn: clinicDate('2027-06-01'), examinedOn: [clinicDate('2027-05-01')] },
    ['examinations'],
  ],
];

describe('an enhancement', () => {
  for (const [what, change, unmet] of CASES) {
    test(`${what} · ${unmet.length === 0 ? 'is under cover' : 'is out of cover'}`, () => {
      const result = priceEnhancement(cover, { ...asked, ...change });
      const failed = result.conditions.filter(({ met }) => !met).map(({ condition }) => condition);
      expect(failed).toEqual(unmet);
      expect(result.underCover).toBe(unmet.length === 0);
      expect(result.priceMinor).toBe(unmet.length === 0 ? 0 : eur(700));
    });
  }
  test('each condition · is shown with what it asks and what was found', () => {
    const { conditions } = priceEnhancement(cover, asked);
    expect(conditions.map(({ condition }) => condition)).toEqual([
      'not_before',
      'not_after',
      'count',
      'threshold',
      'examinations',
    ]);
    for (const { asks, found } of conditions) expect(asks && found).toBeTruthy();
  });
  test('out of cover · a discount carries over only where the cover says so', () => {
    const late = { ...asked, used: 1, carriedRateBp: 1_000 };
    expect(priceEnhancement(cover, late).priceMinor).toBe(eur(630));
    expect(priceEnhancement({ ...cover, carriesDiscount: false }, late).priceMinor).toBe(eur(700));
  });
  test('a threshold of one kind · looks at that kind alone', () => {
    const residual = rx('+0.25 -0.50 x 90');
    const met = (thresholdOf: EnhancementCover['thresholdOf']) =>
      priceEnhancement({ ...cover, thresholdOf }, { ...asked, residual }).underCover;
    expect([met('cylinder'), met('spherical_equivalent'), met('either')]).toEqual([true, false, true]);
  });
  test('a cover without a price after it · throws rather than give it away', () => {
    expect(() => priceEnhancement({ ...cover, priceOutOfCoverMinor: null }, { ...asked, used: 1 })).toThrow(
      RangeError,
    );
  });
});
