import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import {
  accrueFee,
  agreementOn,
  bandFee,
  bandTotal,
  checkFeeTerms,
  clawBack,
  type FeeAgreement,
  type FeeBasis,
  type FeeEvent,
  type FeeTerms,
  type VolumeBand,
} from '#domain/fees/index';
import { minor } from '#domain/money/index';
import { clinicDate } from '#domain/time/index';
import { CASES } from '#tests/factories/cases';
import { EUR } from '#tests/factories/entries';

const perEye: FeeBasis = {
  kind: 'per_eye',
  byProcedure: { lenticule: minor(45_000), surface: minor(40_000) },
};
const rate: FeeBasis = {
  kind: 'rate_of_collected',
  rateBp: 2_000,
  lessPaymentCosts: false,
  lessDirectCosts: false,
};

function agreement(over: Partial<FeeTerms> = {}): FeeAgreement {
  const terms: FeeTerms = {
    currency: EUR,
    basis: perEye,
    enhancement: null,
    trigger: 'done_and_collected',
    monthlyCapMinor: null,
    guarantee: null,
    sharedCare: null,
    withholding: [],
    ...over,
  };
  return { feeAgreementId: 5, versionNo: 3, effectiveOn: clinicDate('2026-01-01'), terms };
}

const event = (over: Partial<FeeEvent> = {}): FeeEvent => ({
  kind: 'surgery',
  eye: 'OD',
  procedureCode: 'lenticule',
  procedureLabel: 'Lenticule extraction',
  doneOn: clinicDate('2026-02-06'),
  shareMinor: minor(220_000),
  collectedMinor: minor(220_000),
  taxMinor: minor(0),
  paymentCostsMinor: minor(3_000),
  directCostsMinor: minor(37_000),
  eyesBefore: 0,
  accruedThisMonthMinor: minor(0),
  ...over,
});

const outcome = (over: Partial<FeeEvent>, terms: Partial<FeeTerms> = {}) => {
  const result = accrueFee(event(over), agreement(terms));
  return result.state === 'accrued' ? result.feeMinor : `${result.reason} ${result.missingMinor}`;
};

describe('accrueFee', () => {
  const bands: FeeBasis = {
    kind: 'volume_bands',
    reading: 'whole',
    per: 'month',
    bands: [
      { fromEye: 1, perEyeMinor: minor(40_000) },
      { fromEye: 3, perEyeMinor: minor(45_000) },
    ],
  };
  const net: FeeBasis = { ...rate, lessPaymentCosts: true, lessDirectCosts: true };
  test.each<[string, number | string, number | string]>([
    ['a sum per eye', outcome({}), 45_000],
    ['a sum per eye of another procedure', outcome({ procedureCode: 'surface' }), 40_000],
    ['a rate of what was collected', outcome({}, { basis: rate }), 44_000],
    ['a rate, tax aside', outcome({ taxMinor: minor(20_000) }, { basis: rate }), 40_000],
    ['a rate after costs', outcome({}, { basis: net }), 36_000],
    [
      'a rate after costs above what came in',
      outcome({ directCostsMinor: minor(999_999) }, { basis: net }),
      0,
    ],
    [
      'a rate, half a cent away from zero',
      outcome(
        { collectedMinor: minor(220_003), shareMinor: minor(220_003) },
        { basis: { ...rate, rateBp: 5_000 } },
      ),
      110_002,
    ],
    ['the second eye of a whole band', outcome({ eyesBefore: 1 }, { basis: bands }), 40_000],
    ['the eye that reaches the next whole band', outcome({ eyesBefore: 2 }, { basis: bands }), 55_000],
    [
      'an enhancement the agreement pays',
      outcome(
        { kind: 'enhancement', shareMinor: minor(0), collectedMinor: minor(0) },
        { enhancement: { kind: 'per_eye', amountMinor: minor(22_500) } },
      ),
      22_500,
    ],
    [
      'an enhancement by rate',
      outcome({ kind: 'enhancement' }, { enhancement: { kind: 'rate_of_collected', rateBp: 3_000 } }),
      66_000,
    ],
    ['an enhancement nobody pays for', outcome({ kind: 'enhancement' }), 0],
    [
      'the last under the cap',
      outcome({ accruedThisMonthMinor: minor(455_000) }, { monthlyCapMinor: minor(500_000) }),
      45_000,
    ],
    [
      'what the cap leaves',
      outcome({ accruedThisMonthMinor: minor(480_000) }, { monthlyCapMinor: minor(500_000) }),
      20_000,
    ],
    [
      'nothing over the cap',
      outcome({ accruedThisMonthMinor: minor(510_000) }, { monthlyCapMinor: minor(500_000) }),
      0,
    ],
    ['held: not done', outcome({ doneOn: null }), 'not_done 0'],
    ['held: a balance is unpaid', outcome({ collectedMinor: minor(190_000) }), 'unpaid 30000'],
    ['paid or not, where done is enough', outcome({ collectedMinor: minor(0) }, { trigger: 'done' }), 45_000],
    ['held: the agreement does not know the procedure', outcome({ procedureCode: 'lens' }), 'no_rate 0'],
  ])('%s', (_, fee, expected) => {
    expect(fee).toBe(expected);
  });
  test('a fee · with its derivation · ends at the fee and names version and rule', () => {
    const result = accrueFee(event({ taxMinor: minor(20_000) }), agreement({ basis: net }));
    expect(result.why).toEqual({
      title: 'Fee for the right eye',
      steps: [
        { label: 'Collected for the eye', amountMinor: 220_000 },
        { label: 'Tax', amountMinor: -20_000 },
        { label: 'Card and lender costs', amountMinor: -3_000 },
        { label: 'Licence and consumables', amountMinor: -37_000 },
        { label: 'Counted', amountMinor: 160_000 },
        {
          label: '20\u00a0% of it',
          amountMinor: 32_000,
          rule: 'rate_of_collected',
          version: 'agreement version 3',
        },
        { label: 'Fee', amountMinor: 32_000 },
      ],
    });
  });
  test('a held fee · says · what is missing', () => {
    const result = accrueFee(event({ collectedMinor: minor(190_000) }), agreement());
    expect(result.state === 'held' && result.words).toBe('Balance of €300.00 unpaid.');
  });
});

describe('agreementOn', () => {
  const version = (versionNo: number, on: string): FeeAgreement => ({
    ...agreement(),
    versionNo,
    effectiveOn: clinicDate(on),
  });
  const versions = [version(2, '2026-03-01'), version(1, '2026-01-01'), version(3, '2026-06-01')];
  test.each([
    ['2025-12-31', undefined],
    ['2026-01-01', 1],
    ['2026-02-28', 1],
    ['2026-03-01', 2],
    ['2027-01-01', 3],
  ])('on %s · version %s is in force', (on, versionNo) => {
    expect(agreementOn(versions, clinicDate(on))?.versionNo).toBe(versionNo);
  });
});

describe('checkFeeTerms', () => {
  test('unsound terms · are refused · naming the field', () => {
    const bands = (...from: number[]): FeeBasis => ({
      kind: 'volume_bands',
      reading: 'marginal',
      per: 'month',
      bands: from.map((fromEye) => ({ fromEye, perEyeMinor: minor(1) })),
    });
    const fields = (over: Partial<FeeTerms>) =>
      checkFeeTerms(agreement(over).terms).map(({ field }) => field);
    expect(fields({})).toEqual([]);
    expect(fields({ basis: bands(1, 21, 41) })).toEqual([]);
    expect(fields({ basis: bands(2, 21) })).toEqual(['basis.bands']);
    expect(fields({ basis: bands(1, 21, 21) })).toEqual(['basis.bands']);
    expect(fields({ basis: bands() })).toEqual(['basis.bands']);
    expect(fields({ basis: { ...rate, rateBp: 10_001 } })).toEqual(['basis.rateBp']);
    expect(fields({ sharedCare: { careRateBp: -1, days: 0 } })).toEqual([
      'sharedCare.careRateBp',
      'sharedCare.days',
    ]);
  });
});

describe('bands', () => {
  const anyBands = fc
    .array(fc.record({ gap: fc.integer({ min: 1, max: 20 }), perEye: fc.nat({ max: 100_000 }) }), {
      minLength: 1,
      maxLength: 5,
    })
    .map((rows) => {
      let fromEye = 1;
      return rows.map(({ gap, perEye: each }, index): VolumeBand => {
        if (index > 0) fromEye += gap;
        return { fromEye, perEyeMinor: minor(each) };
      });
    });
  test('any bands, in both readings · the fees of a period · add up to its total', () => {
    fc.assert(
      fc.property(
        anyBands,
        fc.constantFrom('marginal' as const, 'whole' as const),
        fc.nat({ max: 80 }),
        (rows, reading, eyes) => {
          const fees = Array.from({ length: eyes }, (_, before) => bandFee(rows, reading, before));
          expect(fees.reduce((total, fee) => total + fee, 0)).toBe(bandTotal(rows, reading, eyes));
          const plain = Array.from({ length: eyes }, (_, index) => {
            const eye = reading === 'whole' ? eyes : index + 1;
            return rows.filter(({ fromEye }) => fromEye <= eye).at(-1)?.perEyeMinor ?? 0;
          });
          expect(bandTotal(rows, reading, eyes)).toBe(plain.reduce((total: number, fee) => total + fee, 0));
        },
      ),
      { numRuns: CASES },
    );
  });
});

describe('clawBack', () => {
  const share = {
    feeMinor: minor(45_000),
    clawback: { kind: 'share', shareMinor: minor(220_000) },
    versionNo: 3,
  } as const;
  const byRate = {
    feeMinor: minor(36_000),
    clawback: { kind: 'rate', rateBp: 2_000 },
    versionNo: 3,
  } as const;
  const back = (accrual: Parameters<typeof clawBack>[0], total: number, tax = 0, before = 0) =>
    clawBack(accrual, { totalMinor: minor(total), taxMinor: minor(tax) }, minor(before)).amountMinor;
  test.each<[string, number, number]>([
    ['all of the share returned', back(share, 220_000), 45_000],
    ['half of it', back(share, 110_000), 22_500],
    ['more than the share', back(share, 300_000), 45_000],
    ['the other half after a first', back(share, 220_000, 0, 22_500), 22_500],
    ['a rate of what is returned without tax', back(byRate, 110_000, 10_000), 20_000],
    ['never more than the fee after costs was', back(byRate, 220_000), 36_000],
    [
      'nothing for an eye under cover',
      back({ ...share, clawback: { kind: 'share', shareMinor: minor(0) } }, 500),
      0,
    ],
  ])('%s', (_, amount, expected) => {
    expect(amount).toBe(expected);
  });
  test('any returns in any number of parts · take back what one would, never more than the fee (invariant 17)', () => {
    const money = (max: number) => fc.integer({ min: 1, max }).map(minor);
    fc.assert(
      fc.property(
        money(1_000_000),
        fc.oneof(
          fc.record({ kind: fc.constant('share' as const), shareMinor: money(1_000_000) }),
          fc.record({ kind: fc.constant('rate' as const), rateBp: fc.nat({ max: 10_000 }) }),
        ),
        fc.array(money(400_000), { minLength: 1, maxLength: 5 }),
        (feeMinor, clawback, returns) => {
          const accrual = { feeMinor, clawback, versionNo: 1 };
          let returned = 0;
          let clawed = 0;
          for (const each of returns) {
            returned += each;
            clawed += back(accrual, returned, 0, clawed);
            expect(clawed <= feeMinor).toBe(true);
          }
          expect(clawed).toBe(back(accrual, returned));
        },
      ),
      { numRuns: CASES },
    );
  });
});
