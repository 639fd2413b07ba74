import { currencyCode, type Minor, minor } from '#domain/money/index';
import type { CostBook } from '#domain/pricing/costs';
import type { AddOn, Band, Discount, PaymentPlan, PriceBook, Procedure } from '#domain/pricing/index';
import { clinicDate } from '#domain/time/index';

/** Euros and cents of the invented clinic. */
const eur = (euros: number, cents = 0): Minor => minor(euros * 100 + cents);

const EXEMPT = 'medical-exempt';
const GOODS = 'goods';
const FOLLOW_UP = 'six-visits';

const LASIK = 'lasik';
const SURFACE = 'surface-ablation';
const LENTICULE = 'lenticule-extraction';
const ALL = [LASIK, SURFACE, LENTICULE];

function procedure(id: string, label: string, price: Minor, standAlone: Minor): Procedure {
  return {
    id,
    label,
    priceMinor: price,
    standAloneMinor: standAlone,
    taxClassId: EXEMPT,
    followUpId: FOLLOW_UP,
  };
}

type Edges = Pick<Band, 'fromMd' | 'fromIncluded' | 'toMd' | 'toIncluded'>;

/** From an edge that belongs to the band up to one that does not. */
function upTo(fromMd: number, toMd: number): Edges {
  return { fromMd, fromIncluded: true, toMd, toIncluded: false };
}

function band(
  id: string,
  label: string,
  measure: Band['measure'],
  edges: Edges,
  amount: Minor,
  requires: string[] = [],
): Band {
  return {
    id,
    label,
    measure,
    procedureIds: ALL,
    ...edges,
    charge: { kind: 'amount', amountMinor: amount },
    requiresAddOnIds: requires,
  };
}

const BANDS: readonly Band[] = [
  band('cylinder-1.50', 'Cylinder 1.50 to under 3.00', 'cylinder', upTo(1_500, 3_000), eur(150), [
    'axis-marking',
  ]),
  band(
    'cylinder-3.00',
    'Cylinder 3.00 to 6.00',
    'cylinder',
    { ...upTo(3_000, 6_000), toIncluded: true },
    eur(280),
    ['axis-marking'],
  ),
  band(
    'meridian-6.00',
    'Strongest meridian over 6.00 to 8.00',
    'meridian',
    {
      fromMd: 6_000,
      fromIncluded: false,
      toMd: 8_000,
      toIncluded: true,
    },
    eur(120),
  ),
  band(
    'meridian-8.00',
    'Strongest meridian over 8.00 to 12.00',
    'meridian',
    {
      fromMd: 8_000,
      fromIncluded: false,
      toMd: 12_000,
      toIncluded: true,
    },
    eur(240),
  ),
];

function addOn(
  id: string,
  label: string,
  per: AddOn['per'],
  purpose: AddOn['purpose'],
  price: Minor,
  tax = EXEMPT,
): AddOn {
  return { id, label, per, priceMinor: price, standAloneMinor: price, taxClassId: tax, purpose };
}

function secondEye(first: string, second: string, label: string) {
  return {
    id: `second-eye-${first}-${second}`,
    label,
    procedureIds: [first, second] as const,
    sameSession: { kind: 'rate', rateBp: 1_000 } as const,
    staged: { withinDays: 90, off: { kind: 'rate', rateBp: 500 } as const },
    ifNever: { kind: 'first_eye_keeps_its_price' } as const,
  };
}

const DISCOUNTS: readonly Discount[] = [
  {
    id: 'goodwill',
    reason: 'Goodwill of the clinic',
    off: { kind: 'rate', scope: 'surgery', ownLimitBp: 500, approverLimitBp: 1_500 },
    stackingGroup: 'goodwill',
    aftercare: null,
  },
  {
    id: 'two-of-a-family',
    reason: 'Two of a family',
    off: { kind: 'amount', ownLimitMinor: eur(200), approverLimitMinor: eur(400) },
    stackingGroup: 'family',
    aftercare: null,
  },
  {
    id: 'own-optometrist',
    reason: 'Check-ups with the patient’s own optometrist',
    off: { kind: 'amount', ownLimitMinor: eur(100), approverLimitMinor: eur(100) },
    stackingGroup: 'aftercare',
    aftercare: {
      followUpId: 'two-visits',
      coverId: null,
      words: 'two visits at the clinic instead of six, and no enhancement cover.',
    },
  },
];

const PLANS: readonly PaymentPlan[] = [
  {
    kind: 'interest_free',
    id: 'ten-months',
    label: 'Ten months, no charge',
    instalments: 10,
    takesDeposit: true,
    leastMinor: eur(1_000),
  },
  {
    kind: 'fee_bearing',
    id: 'two-years',
    label: 'Twenty-four months',
    instalments: 24,
    takesDeposit: true,
    leastMinor: eur(1_500),
    rateBp: 990,
    taxClassId: 'finance-exempt',
  },
  {
    kind: 'lender',
    id: 'lender-year',
    label: 'Twelve months through a lender',
    instalments: 12,
    takesDeposit: true,
    leastMinor: eur(1_500),
    rateBp: 0,
  },
];

/** The invented book of the demo clinic, version 7, in euros. */
export const demoPriceBook: PriceBook = {
  id: 'lantern-quay',
  version: 7,
  inForceFrom: clinicDate('2026-02-01'),
  currency: currencyCode('EUR'),
  taxClasses: [
    {
      id: EXEMPT,
      label: 'Medical care, tax exempt',
      treatment: 'exempt',
      exemptionReason: 'Medical care is exempt from value added tax.',
      stated: 'included',
      goesBy: 'surgery',
      rates: [],
    },
    {
      id: 'finance-exempt',
      label: 'Instalment charge, tax exempt',
      treatment: 'exempt',
      exemptionReason: 'The granting of credit is exempt from value added tax.',
      stated: 'included',
      goesBy: 'quote',
      rates: [],
    },
    {
      id: GOODS,
      label: 'Tax on goods',
      treatment: 'taxed',
      exemptionReason: null,
      stated: 'included',
      goesBy: 'surgery',
      rates: [{ from: clinicDate('2020-01-01'), rateBp: 2_100 }],
    },
  ],
  procedures: [
    procedure(LASIK, 'LASIK', eur(2_400), eur(2_400)),
    procedure(SURFACE, 'Surface ablation', eur(1_900), eur(1_900)),
    procedure(LENTICULE, 'Lenticule extraction', eur(2_350), eur(2_350)),
  ],
  bands: BANDS,
  secondEye: [
    secondEye(LASIK, LASIK, 'Both eyes LASIK'),
    secondEye(SURFACE, SURFACE, 'Both eyes surface ablation'),
    secondEye(LENTICULE, LENTICULE, 'Both eyes lenticule extraction'),
    secondEye(LENTICULE, SURFACE, 'Lenticule extraction and surface ablation'),
    secondEye(LASIK, SURFACE, 'LASIK and surface ablation'),
    secondEye(LASIK, LENTICULE, 'LASIK and lenticule extraction'),
  ],
  followUps: [
    {
      id: FOLLOW_UP,
      label: 'Aftercare, six visits in twelve months',
      per: 'course',
      priceMinor: eur(300),
      standAloneMinor: eur(300),
      taxClassId: EXEMPT,
      visits: [
        { label: 'Day 1', afterDays: 1, windowDays: 0 },
        { label: 'Week 1', afterDays: 7, windowDays: 2 },
        { label: 'Month 1', afterDays: 30, windowDays: 7 },
        { label: 'Month 3', afterDays: 91, windowDays: 14 },
        { label: 'Month 6', afterDays: 182, windowDays: 21 },
        { label: 'Month 12', afterDays: 365, windowDays: 30 },
      ],
    },
    {
      id: 'two-visits',
      label: 'Aftercare, two visits in the first week',
      per: 'course',
      priceMinor: eur(100),
      standAloneMinor: eur(100),
      taxClassId: EXEMPT,
      visits: [
        { label: 'Day 1', afterDays: 1, windowDays: 0 },
        { label: 'Week 1', afterDays: 7, windowDays: 2 },
      ],
    },
  ],
  covers: [
    {
      id: 'cover-24',
      label: 'Enhancement cover, 24 months',
      months: 24,
      earliestMonth: 3,
      countPerEye: 1,
      thresholdMd: 500,
      thresholdOf: 'either',
      examinationEveryMonths: 12,
      priceMinor: eur(90),
      standAloneMinor: eur(90),
      taxClassId: EXEMPT,
      priceOutOfCoverMinor: eur(900),
      carriesDiscount: false,
    },
  ],
  addOns: [
    addOn('axis-marking', 'Axis marking', 'eye', 'surgery', eur(60)),
    addOn('assessment', 'Assessment', 'course', 'assessment', eur(150)),
    addOn('drops', 'Eye drops for the first month', 'course', 'goods', eur(36), GOODS),
    addOn('night-nurse', 'Nurse on the evening after', 'session', 'service', eur(80)),
  ],
  packages: [
    {
      id: 'both-eyes-all-in',
      label: 'Both eyes, all in',
      eyes: 'both',
      procedureIds: [LASIK, LENTICULE],
      price: { kind: 'amount', amountMinor: eur(4_990) },
      taxClassId: EXEMPT,
      includes: { bands: false, aftercare: true, addOnIds: ['assessment'], coverId: 'cover-24' },
      included: [
        'Assessment',
        'Six check-ups in twelve months',
        'A second treatment if you need one, for 24 months',
      ],
      notIncluded: ['surcharges for strong cylinders'],
      mayCostMore: false,
    },
  ],
  priceLists: [
    {
      id: 'hospital-staff',
      label: 'Hospital staff rate',
      evidence: 'badge seen',
      rule: { kind: 'rate', rateBp: 400, scope: 'everything' },
      combinesWithDiscounts: true,
    },
    {
      id: 'saltmarch-ferries',
      label: 'Saltmarch Ferries',
      evidence: 'letter of the employer seen',
      rule: {
        kind: 'prices',
        prices: { [LASIK]: eur(2_250), [LENTICULE]: eur(2_200), [SURFACE]: eur(1_780) },
      },
      combinesWithDiscounts: false,
    },
  ],
  discounts: DISCOUNTS,
  deposit: {
    id: 'deposit',
    charge: { kind: 'rate', rateBp: 1_000 },
    floorMinor: eur(150),
    ceilingMinor: eur(600),
  },
  balanceDueDays: 7,
  paymentPlans: PLANS,
  cancellation: {
    id: 'ladder',
    reflectionDays: 7,
    rungs: [
      { id: 'week', minDaysBefore: 7, kept: { kind: 'amount', amountMinor: eur(75) } },
      { id: 'days', minDaysBefore: 1, kept: { kind: 'rate', rateBp: 1_000 } },
    ],
    noShow: { kind: 'rate', rateBp: 2_000 },
    reschedule: { freeMoves: 1, fee: { kind: 'amount', amountMinor: eur(50) } },
  },
  validityDays: 30,
  allocationPolicy: 'B',
  notIncluded: ['glasses', 'travel'],
};

/** What the rules of the book cost the clinic; for staff. */
export const demoCostBook: CostBook = {
  perEyeMinor: { [LASIK]: eur(310), [SURFACE]: eur(190), [LENTICULE]: eur(420) },
  addOnMinor: { drops: eur(14), 'axis-marking': eur(3) },
  lender: { 'lender-year': { rateBp: 650, fixedMinor: eur(0) } },
};
