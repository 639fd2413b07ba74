import { currencyCode, type Minor, minor } from '#domain/money/index';
import type { AddOn, Band, Charge, PriceBook, Procedure, SecondEyeRule } from '#domain/pricing/index';
import { clinicDate } from '#domain/time/index';

/** Euros of the hand-checked courses. */
export const eur = (euros: number): Minor => minor(Math.round(euros * 100));

const off = (percent: number): Charge => ({ kind: 'rate', rateBp: percent * 100 });
const amount = (euros: number): Charge => ({ kind: 'amount', amountMinor: eur(euros) });

function procedure(id: string, price: number): Procedure {
  return {
    id,
    label: id,
    priceMinor: eur(price),
    standAloneMinor: eur(price),
    taxClassId: 'care',
    followUpId: 'visits',
  };
}

function band(id: string, measure: Band['measure'], edges: string, charge: Charge, requires: string[]): Band {
  const [, open, from, to, close] = /^([[(])([\d.]+), ([\d.]+)([\])])$/.exec(edges) ?? [];
  return {
    id,
    label: `${measure} ${edges}`,
    measure,
    procedureIds: ['lasik', 'surface', 'lenticule'],
    fromMd: Number(from) * 1000,
    fromIncluded: open === '[',
    toMd: Number(to) * 1000,
    toIncluded: close === ']',
    charge,
    requiresAddOnIds: requires,
  };
}

function addOn(
  id: string,
  per: AddOn['per'],
  purpose: AddOn['purpose'],
  price: number,
  taxClassId = 'care',
): AddOn {
  return { id, label: id, per, purpose, priceMinor: eur(price), standAloneMinor: eur(price), taxClassId };
}

function pair(
  a: string,
  b: string,
  sameSession: Charge | null,
  staged: SecondEyeRule['staged'],
): SecondEyeRule {
  return {
    id: `pair-${a}-${b}`,
    label: `${a} and ${b}`,
    procedureIds: [a, b],
    sameSession,
    staged,
    ifNever: { kind: 'first_eye_keeps_its_price' },
  };
}

function tax(
  id: string,
  stated: 'included' | 'excluded',
  percent: number,
  later: number,
): PriceBook['taxClasses'][0] {
  return {
    id,
    label: `Tax, ${id}`,
    treatment: 'taxed',
    exemptionReason: null,
    stated,
    goesBy: 'surgery',
    rates: [
      { from: clinicDate('2020-01-01'), rateBp: percent * 100 },
      { from: clinicDate('2026-05-01'), rateBp: later * 100 },
    ],
  };
}

/** A small sound book with round figures, so that a course can be checked in the head. */
export const goldenBook: PriceBook = {
  id: 'golden',
  version: 1,
  inForceFrom: clinicDate('2026-01-01'),
  currency: currencyCode('EUR'),
  taxClasses: [
    {
      id: 'care',
      label: 'Medical care',
      treatment: 'exempt',
      exemptionReason: 'Medical care',
      stated: 'included',
      goesBy: 'surgery',
      rates: [],
    },
    tax('in', 'included', 20, 25),
    tax('on-top', 'excluded', 10, 10),
  ],
  procedures: [procedure('lasik', 2_000), procedure('surface', 1_500), procedure('lenticule', 2_200)],
  bands: [
    band('cyl-1.5', 'cylinder', '[1.50, 3.00)', amount(100), ['axis-marking']),
    band('cyl-3', 'cylinder', '[3.00, 6.00]', off(10), ['axis-marking']),
    band('mer-6', 'meridian', '(6.00, 10.00]', amount(150), []),
  ],
  secondEye: [
    pair('lasik', 'lasik', off(10), { withinDays: 90, off: off(5) }),
    pair('surface', 'surface', amount(200), null),
    pair('lasik', 'surface', off(8), { withinDays: 60, off: off(4) }),
  ],
  followUps: [
    {
      id: 'visits',
      label: 'Six visits',
      per: 'course',
      priceMinor: eur(240),
      standAloneMinor: eur(240),
      taxClassId: 'care',
      visits: [1, 7, 30, 91, 182, 365].map((afterDays) => ({
        label: `Day ${afterDays}`,
        afterDays,
        windowDays: 3,
      })),
    },
    {
      id: 'short',
      label: 'Two visits',
      per: 'course',
      priceMinor: eur(90),
      standAloneMinor: eur(90),
      taxClassId: 'care',
      visits: [1, 7].map((afterDays) => ({ label: `Day ${afterDays}`, afterDays, windowDays: 3 })),
    },
  ],
  covers: [
    {
      id: 'c24',
      label: 'Cover, 24 months',
      months: 24,
      earliestMonth: 3,
      countPerEye: 1,
      thresholdMd: 500,
      thresholdOf: 'either',
      examinationEveryMonths: 12,
      priceMinor: eur(80),
      standAloneMinor: eur(80),
      taxClassId: 'care',
      priceOutOfCoverMinor: eur(700),
      carriesDiscount: true,
    },
  ],
  addOns: [
    addOn('axis-marking', 'eye', 'surgery', 50),
    addOn('near-planning', 'eye', 'service', 70),
    addOn('assessment', 'course', 'assessment', 120),
    addOn('nurse', 'session', 'service', 60),
    addOn('drops', 'course', 'goods', 30, 'in'),
    addOn('lens-care', 'eye', 'goods', 24, 'on-top'),
  ],
  packages: [
    {
      id: 'all-in',
      label: 'All in',
      eyes: 'both',
      procedureIds: ['lasik', 'surface'],
      price: amount(4_100),
      taxClassId: 'care',
      includes: { bands: true, aftercare: true, addOnIds: ['assessment'], coverId: 'c24' },
      included: ['all visits'],
      notIncluded: ['axis marking'],
      mayCostMore: false,
    },
    {
      id: 'single',
      label: 'One eye',
      eyes: 'one',
      procedureIds: ['lasik'],
      price: off(10),
      taxClassId: 'care',
      includes: { bands: false, aftercare: true, addOnIds: ['assessment'], coverId: null },
      included: [],
      notIncluded: [],
      mayCostMore: false,
    },
  ],
  priceLists: [
    {
      id: 'staff',
      label: 'Staff',
      evidence: 'badge seen',
      rule: { kind: 'rate', rateBp: 500, scope: 'everything' },
      combinesWithDiscounts: true,
    },
    {
      id: 'ferries',
      label: 'Ferries',
      evidence: null,
      rule: { kind: 'prices', prices: { lasik: eur(1_800) } },
      combinesWithDiscounts: false,
    },
  ],
  discounts: [
    {
      id: 'goodwill',
      reason: 'Goodwill',
      off: { kind: 'rate', scope: 'surgery', ownLimitBp: 500, approverLimitBp: 1_500 },
      stackingGroup: 'goodwill',
      aftercare: null,
    },
    {
      id: 'family',
      reason: 'Family',
      off: { kind: 'amount', ownLimitMinor: eur(100), approverLimitMinor: eur(300) },
      stackingGroup: 'family',
      aftercare: null,
    },
    {
      id: 'own-optometrist',
      reason: 'Own optometrist',
      off: { kind: 'amount', ownLimitMinor: eur(80), approverLimitMinor: eur(80) },
      stackingGroup: 'family',
      aftercare: { followUpId: 'short', coverId: null, words: 'two visits, no cover.' },
    },
  ],
  deposit: { id: 'deposit', charge: off(10), floorMinor: eur(150), ceilingMinor: eur(400) },
  balanceDueDays: 14,
  paymentPlans: [
    {
      kind: 'interest_free',
      id: 'ten',
      label: 'Ten months',
      instalments: 10,
      takesDeposit: true,
      leastMinor: eur(1_000),
    },
    {
      kind: 'fee_bearing',
      id: 'two-years',
      label: 'Two years',
      instalments: 24,
      takesDeposit: false,
      leastMinor: eur(1_000),
      rateBp: 990,
      taxClassId: 'care',
    },
    {
      kind: 'lender',
      id: 'lender',
      label: 'Lender',
      instalments: 12,
      takesDeposit: true,
      leastMinor: eur(1_000),
      rateBp: 0,
    },
  ],
  cancellation: {
    id: 'ladder',
    reflectionDays: 14,
    rungs: [
      { id: 'early', minDaysBefore: 14, kept: amount(50) },
      { id: 'late', minDaysBefore: 1, kept: off(20) },
    ],
    noShow: off(50),
    reschedule: { freeMoves: 1, fee: amount(40) },
  },
  validityDays: 30,
  allocationPolicy: 'B',
  notIncluded: ['glasses'],
};
