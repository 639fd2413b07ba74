import fc from 'fast-check';
import { currencyCode, type Minor, minor } from '#domain/money/index';
import type {
  AddOn,
  Band,
  Charge,
  CourseInput,
  Discount,
  EyeWish,
  Package,
  PaymentPlan,
  PriceBook,
  TaxClass,
} from '#domain/pricing/index';
import { addDays, clinicDate } from '#domain/time/index';
import { anyPrescription } from './prescriptions.ts';

/** How many cases a property runs: TENDERLIGHT_CASES, else 1,000. */
export const CASES = Number.parseInt(process.env.TENDERLIGHT_CASES ?? '1000', 10);

const PROCEDURES = ['p1', 'p2', 'p3'];
const TODAY = clinicDate('2026-03-12');

const amount = fc.integer({ min: 0, max: 600_000 }).map(minor);
const small = fc.integer({ min: 0, max: 40_000 }).map(minor);
const tiny = fc.oneof(fc.integer({ min: 0, max: 9 }).map(minor), small);
const rateBp = fc.integer({ min: 0, max: 10_000 });
const charge: fc.Arbitrary<Charge> = fc.oneof(
  tiny.map((amountMinor) => ({ kind: 'amount' as const, amountMinor })),
  fc.integer({ min: 0, max: 3_000 }).map((rate) => ({ kind: 'rate' as const, rateBp: rate })),
);
const taxId = fc.constantFrom('exempt', 'included', 'excluded');

const taxClasses: fc.Arbitrary<readonly TaxClass[]> = fc
  .tuple(
    fc.integer({ min: 0, max: 2_700 }),
    fc.integer({ min: 0, max: 2_700 }),
    fc.constantFrom('surgery', 'quote'),
  )
  .map(([before, after, goesBy]) =>
    (['exempt', 'included', 'excluded'] as const).map((id) => ({
      id,
      label: id,
      treatment: id === 'exempt' ? ('exempt' as const) : ('taxed' as const),
      exemptionReason: id === 'exempt' ? 'care' : null,
      stated: id === 'excluded' ? ('excluded' as const) : ('included' as const),
      goesBy: goesBy as 'surgery' | 'quote',
      rates:
        id === 'exempt'
          ? []
          : [
              { from: clinicDate('2020-01-01'), rateBp: before },
              { from: clinicDate('2026-05-01'), rateBp: after },
            ],
    })),
  );

/** Bands that follow one another without a hole, each edge on either side. */
function bandsOf(
  measure: Band['measure'],
  edges: readonly [number, boolean][],
  charges: readonly Charge[],
): Band[] {
  const sorted = [...new Map(edges)].sort((a, b) => a[0] - b[0]);
  return sorted.map(([from, included], index) => {
    const next = sorted[index + 1];
    return {
      id: `${measure}-${index}`,
      label: `${measure} ${index}`,
      measure,
      procedureIds: PROCEDURES,
      fromMd: from * 250,
      fromIncluded: included,
      toMd: next ? next[0] * 250 : null,
      toIncluded: next ? !next[1] : false,
      charge: charges[index] ?? { kind: 'amount', amountMinor: minor(0) },
      requiresAddOnIds: index === 1 ? ['eye-add-on'] : [],
    };
  });
}

const edges = fc.array(fc.tuple(fc.integer({ min: 0, max: 60 }), fc.boolean()), { maxLength: 4 });
const bands = fc
  .tuple(edges, edges, fc.array(charge, { minLength: 8, maxLength: 8 }))
  .map(([meridian, cylinder, charges]) => [
    ...bandsOf('meridian', meridian, charges.slice(0, 4)),
    ...bandsOf('cylinder', cylinder, charges.slice(4)),
  ]);

function addOn(id: string, per: AddOn['per'], purpose: AddOn['purpose']): fc.Arbitrary<AddOn> {
  return fc.tuple(tiny, small, taxId).map(([priceMinor, standAloneMinor, taxClassId]) => ({
    id,
    label: id,
    per,
    purpose,
    priceMinor,
    standAloneMinor,
    taxClassId,
  }));
}

const packages: fc.Arbitrary<Package> = fc
  .tuple(
    fc.oneof(
      amount.map((amountMinor) => ({ kind: 'amount' as const, amountMinor })),
      rateBp.map((rate) => ({ kind: 'rate' as const, rateBp: rate })),
    ),
    taxId,
    fc.boolean(),
    fc.boolean(),
    fc.subarray(['eye-add-on', 'session-add-on', 'course-add-on']),
    fc.constantFrom(null, 'cover'),
  )
  .map(([price, taxClassId, withBands, aftercare, addOnIds, coverId]) => ({
    id: 'package',
    label: 'package',
    eyes: 'both' as const,
    procedureIds: PROCEDURES,
    price,
    taxClassId,
    includes: { bands: withBands, aftercare, addOnIds, coverId },
    included: [],
    notIncluded: [],
    mayCostMore: false,
  }));

const discounts: fc.Arbitrary<readonly Discount[]> = fc
  .constantFrom('everything', 'surgery', 'named')
  .map((scope) => [
    {
      id: 'rate',
      reason: 'rate',
      off: {
        kind: 'rate' as const,
        scope:
          scope === 'named'
            ? { ruleIds: ['p1', 'eye-add-on', 'cover'] }
            : (scope as 'everything' | 'surgery'),
        ownLimitBp: 1_000,
        approverLimitBp: 10_000,
      },
      stackingGroup: 'a',
      aftercare: null,
    },
    {
      id: 'amount',
      reason: 'amount',
      off: { kind: 'amount' as const, ownLimitMinor: minor(0), approverLimitMinor: minor(2_000_000) },
      stackingGroup: 'b',
      aftercare: null,
    },
  ]);

const plans: fc.Arbitrary<readonly PaymentPlan[]> = fc
  .tuple(fc.integer({ min: 1, max: 36 }), fc.boolean(), fc.integer({ min: 1, max: 3_000 }), taxId)
  .map(([instalments, takesDeposit, rate, taxClassId]) => {
    const common = { label: 'plan', instalments, takesDeposit, leastMinor: minor(0) };
    return [
      { ...common, kind: 'interest_free' as const, id: 'interest-free' },
      { ...common, kind: 'fee_bearing' as const, id: 'fee-bearing', rateBp: rate, taxClassId },
      { ...common, kind: 'lender' as const, id: 'lender', rateBp: rate },
    ];
  });

const pairs = PROCEDURES.flatMap((a, i) => PROCEDURES.slice(i).map((b) => [a, b] as const));

const rules = fc.record({
  taxClasses,
  bands,
  prices: fc.array(fc.tuple(amount, amount, taxId), { minLength: 3, maxLength: 3 }),
  secondEye: fc.array(fc.tuple(charge, charge, fc.integer({ min: 1, max: 120 })), {
    minLength: 6,
    maxLength: 6,
  }),
  followUp: fc.tuple(
    small,
    small,
    taxId,
    fc.constantFrom('course' as const, 'eye' as const),
    fc.integer({ min: 0, max: 6 }),
  ),
  cover: fc.tuple(small, small, taxId),
  addOns: fc.tuple(
    addOn('eye-add-on', 'eye', 'surgery'),
    addOn('session-add-on', 'session', 'service'),
    addOn('course-add-on', 'course', 'goods'),
    addOn('assessment', 'course', 'assessment'),
  ),
  package: packages,
  discounts,
  listRate: rateBp,
  deposit: fc.tuple(charge, fc.option(small), fc.option(amount)),
  plans,
  rungs: fc.tuple(charge, charge, charge, charge),
  days: fc.tuple(fc.integer({ min: 0, max: 30 }), fc.integer({ min: 0, max: 30 })),
});

/** Any sound book: currencies of 0, 2 and 3 decimals, all tax modes, bands that leave no hole, every kind of rule. */
export const anyPriceBook: fc.Arbitrary<PriceBook> = fc
  .tuple(fc.constantFrom('JPY', 'EUR', 'KWD'), fc.constantFrom('A' as const, 'B' as const), rules)
  .map(([currency, allocationPolicy, r]) => {
    const [depositCharge, floorMinor, ceilingMinor] = r.deposit;
    const [far, near, noShow, fee] = r.rungs;
    const [followPrice, followAlone, followTax, per, visits] = r.followUp;
    const [coverPrice, coverAlone, coverTax] = r.cover;
    return {
      id: 'book',
      version: 1,
      inForceFrom: clinicDate('2026-01-01'),
      currency: currencyCode(currency),
      taxClasses: r.taxClasses,
      procedures: PROCEDURES.map((id, index) => {
        const [priceMinor, standAloneMinor, taxClassId] = at(r.prices, index);
        return {
          id,
          label: id,
          priceMinor,
          standAloneMinor,
          taxClassId,
          followUpId: index === 2 ? null : 'visits',
        };
      }),
      bands: r.bands,
      secondEye: pairs.map(([a, b], index) => {
        const [same, staged, withinDays] = at(r.secondEye, index);
        return {
          id: `second-${a}-${b}`,
          label: `${a} ${b}`,
          procedureIds: [a, b],
          sameSession: same,
          staged: { withinDays, off: staged },
          ifNever: { kind: 'first_eye_keeps_its_price' },
        };
      }),
      followUps: [
        {
          id: 'visits',
          label: 'visits',
          per,
          priceMinor: followPrice,
          standAloneMinor: followAlone,
          taxClassId: followTax,
          visits: Array.from({ length: visits }, (_, k) => ({ label: `v${k}`, afterDays: k, windowDays: 1 })),
        },
      ],
      covers: [
        {
          id: 'cover',
          label: 'cover',
          months: 24,
          earliestMonth: 3,
          countPerEye: 1,
          thresholdMd: 500,
          thresholdOf: 'either',
          examinationEveryMonths: 12,
          priceMinor: coverPrice,
          standAloneMinor: coverAlone,
          taxClassId: coverTax,
          priceOutOfCoverMinor: minor(90_000),
          carriesDiscount: true,
        },
      ],
      addOns: r.addOns,
      packages: [r.package],
      priceLists: [
        {
          id: 'list',
          label: 'list',
          evidence: null,
          rule: { kind: 'rate', rateBp: r.listRate, scope: 'everything' },
          combinesWithDiscounts: true,
        },
      ],
      discounts: r.discounts,
      deposit: { id: 'deposit', charge: depositCharge, floorMinor, ceilingMinor },
      balanceDueDays: r.days[0],
      paymentPlans: r.plans,
      cancellation: {
        id: 'ladder',
        reflectionDays: r.days[1],
        rungs: [
          { id: 'far', minDaysBefore: 14, kept: far },
          { id: 'near', minDaysBefore: 1, kept: near },
        ],
        noShow,
        reschedule: { freeMoves: 1, fee },
      },
      validityDays: 30,
      allocationPolicy,
      notIncluded: [],
    };
  });

function at<Item>(items: readonly Item[], index: number): Item {
  const item = items[index];
  if (item === undefined) throw new RangeError(`No item ${index}`);
  return item;
}

const eyeWish: fc.Arbitrary<EyeWish> = fc.record({
  procedureId: fc.constantFrom(...PROCEDURES),
  prescription: anyPrescription,
  coverId: fc.constantFrom(null, 'cover'),
});

const surgery: fc.Arbitrary<CourseInput['surgery']> = fc.oneof(
  fc.option(fc.integer({ min: 0, max: 90 })).map((days) => ({
    plan: 'same_session' as const,
    on: days === null ? null : addDays(TODAY, days),
  })),
  fc.tuple(fc.integer({ min: 0, max: 90 }), fc.integer({ min: 0, max: 90 })).map(([OD, OS]) => ({
    plan: 'staged' as const,
    on: { OD: addDays(TODAY, OD), OS: addDays(TODAY, OS) },
  })),
);

const wishes = fc.record({
  eyes: fc.oneof(
    { weight: 4, arbitrary: fc.record({ OD: eyeWish, OS: eyeWish }) },
    { weight: 1, arbitrary: fc.record({ OD: eyeWish, OS: fc.constant(null) }) },
    { weight: 1, arbitrary: fc.record({ OD: fc.constant(null), OS: eyeWish }) },
  ),
  surgery,
  addOns: fc.record({
    OD: fc.boolean(),
    OS: fc.boolean(),
    both: fc.subarray(['session-add-on', 'course-add-on', 'assessment']),
  }),
  takesPackage: fc.boolean(),
  listed: fc.boolean(),
  rate: fc.option(fc.integer({ min: 1, max: 10_000 })),
  amount: fc.option(fc.integer({ min: 1, max: 2_000_000 }).map(minor)),
  paymentPlanId: fc.constantFrom(null, 'interest-free', 'fee-bearing', 'lender'),
});

/** Anything that can be asked of `anyPriceBook`. */
export const anyCourse: fc.Arbitrary<CourseInput> = wishes.map((w) => ({
  quotedOn: TODAY,
  acceptedOn: null,
  priceListId: w.listed ? 'list' : null,
  eyes: w.eyes,
  surgery: w.surgery,
  approvedPlan: null,
  addOns: [
    ...(w.addOns.OD && w.eyes.OD ? [{ addOnId: 'eye-add-on', laterality: 'OD' as const }] : []),
    ...(w.addOns.OS && w.eyes.OS ? [{ addOnId: 'eye-add-on', laterality: 'OS' as const }] : []),
    ...w.addOns.both.map((addOnId) => ({ addOnId, laterality: 'OU' as const })),
  ],
  packageId: w.takesPackage && w.eyes.OD && w.eyes.OS ? 'package' : null,
  discounts: [
    ...discountWish('rate', w.rate === null ? null : { kind: 'rate', rateBp: w.rate }),
    ...discountWish('amount', w.amount === null ? null : { kind: 'amount', amountMinor: w.amount }),
  ],
  paymentPlanId: w.paymentPlanId,
}));

function discountWish(
  discountId: string,
  off: { kind: 'rate'; rateBp: number } | { kind: 'amount'; amountMinor: Minor } | null,
): CourseInput['discounts'] {
  return off === null ? [] : [{ discountId, off }];
}
