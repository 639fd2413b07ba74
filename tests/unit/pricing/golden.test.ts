import { describe, expect, test } from 'vitest';
import { formatAmount } from '#domain/money/index';
import { transpose } from '#domain/prescription/index';
import { type CourseInput, type PricedCourse, quoteCourse } from '#domain/pricing/index';
import { clinicDate } from '#domain/time/index';
import { courseInput, eye, staged } from '#tests/factories/courses';
import { eur, goldenBook } from '#tests/factories/golden-book';

const both = (text: string, coverId: string | null = null) => ({
  OD: eye(text, coverId),
  OS: eye(text, coverId),
});
const forBoth = (...ids: string[]) => ids.map((addOnId) => ({ addOnId, laterality: 'OU' as const }));
const rate = (discountId: string, percent: number) => ({
  discountId,
  off: { kind: 'rate' as const, rateBp: percent * 100 },
});
const euros = (discountId: string, amount: number) => ({
  discountId,
  off: { kind: 'amount' as const, amountMinor: eur(amount) },
});

/**
 * Courses worked out by hand from the golden book: what is asked, the sum as it was added up, the total.
 * LASIK 2,000, surface ablation 1,500, lenticule extraction 2,200 an eye; six visits 240 a course.
 */
const COURSES: readonly [what: string, asked: Partial<CourseInput>, sum: string, total: number][] = [
  ['one eye, the right', { eyes: { OD: eye('lasik -3.00'), OS: null } }, '2,000 + 240', 2_240],
  ['one eye, the left', { eyes: { OD: null, OS: eye('surface -3.00') } }, '1,500 + 240', 1_740],
  ['both eyes, one day', {}, '2,000 + 2,000 − 10 % of 2,000 + 240', 4_040],
  ['staged, 30 days', { surgery: staged(30) }, '2,000 + 2,000 − 5 % of 2,000 + 240', 4_140],
  ['staged, day 90 of 90', { surgery: staged(90) }, 'as before', 4_140],
  ['staged, a day too late', { surgery: staged(91) }, '4,000 + 240', 4_240],
  ['staged by name, one day in fact', { surgery: staged(0) }, 'as on one day', 4_040],
  ['no day agreed', { surgery: { plan: 'same_session', on: null } }, 'as on one day', 4_040],
  [
    'mixed, one day: the cheaper is the second',
    { eyes: { OD: eye('lasik -3.00'), OS: eye('surface -3.00') } },
    '2,000 + 1,500 − 8 % of 1,500 + 240',
    3_620,
  ],
  [
    'mixed, staged: the later is the second',
    { eyes: { OD: eye('surface -3.00'), OS: eye('lasik -3.00') }, surgery: staged(30) },
    '1,500 + 2,000 − 4 % of 2,000 + 240',
    3_660,
  ],
  ['an amount off the second eye', { eyes: both('surface -3.00') }, '3,000 − 200 + 240', 3_040],
  [
    'staged where only one day counts',
    { eyes: both('surface -3.00'), surgery: staged(20) },
    '3,000 + 240',
    3_240,
  ],
  [
    'a pair without a rule',
    { eyes: { OD: eye('lasik -3.00'), OS: eye('lenticule -3.00') } },
    '2,000 + 2,200 + 240',
    4_440,
  ],
  [
    'a cylinder of 1.50, the edge that belongs',
    { eyes: { OD: eye('lasik -2.00 -1.50 x 75'), OS: eye('lasik -2.50') } },
    '4,040 + 100 + 50 marking',
    4_190,
  ],
  [
    'a cylinder of 1.25, under it',
    { eyes: { OD: eye('lasik -2.00 -1.25 x 75'), OS: eye('lasik -2.50') } },
    '4,040',
    4_040,
  ],
  [
    'a cylinder of 2.75, under the next edge',
    { eyes: { OD: eye('lasik -2.00 -2.75 x 75'), OS: eye('lasik -2.50') } },
    '4,040 + 100 + 50',
    4_190,
  ],
  [
    'a cylinder of 3.00: a rate of the procedure',
    { eyes: { OD: eye('lasik -2.00 -3.00 x 75'), OS: eye('lasik -2.50') } },
    '4,040 + 10 % of 2,000 + 50',
    4_290,
  ],
  [
    'a cylinder of 6.00, the last that is priced',
    { eyes: { OD: eye('lasik +2.00 -6.00 x 75'), OS: eye('lasik -2.50') } },
    '4,040 + 200 + 50',
    4_290,
  ],
  ['a meridian of 6.00, the edge that does not belong', { eyes: both('lasik -6.00') }, '4,040', 4_040],
  ['a meridian of 6.25, both eyes', { eyes: both('lasik -6.25') }, '4,040 + 2 × 150', 4_340],
  [
    'meridian and cylinder together',
    { eyes: { OD: eye('lasik -5.00 -1.50 x 10'), OS: eye('lasik -2.50') } },
    '4,040 + 150 + 100 + 50',
    4_340,
  ],
  [
    'mixed astigmatism: meridians of +1 and −2',
    { eyes: { OD: eye('lasik +1.00 -3.00 x 90'), OS: eye('lasik -2.50') } },
    '4,040 + 200 + 50',
    4_290,
  ],
  [
    'a far-sighted eye beyond 6',
    { eyes: { OD: eye('lasik +6.50'), OS: eye('lasik pl') } },
    '4,040 + 150',
    4_190,
  ],
  [
    'monovision: the left planned for near',
    { addOns: [{ addOnId: 'near-planning', laterality: 'OS' }] },
    '4,040 + 70',
    4_110,
  ],
  [
    'marking asked for where a band requires it too: once',
    {
      eyes: { OD: eye('lasik -2.00 -1.50 x 75'), OS: eye('lasik -2.50') },
      addOns: [{ addOnId: 'axis-marking', laterality: 'OD' }],
    },
    '4,040 + 100 + 50',
    4_190,
  ],
  ['cover for both eyes', { eyes: both('lasik -3.00', 'c24') }, '4,040 + 2 × 80', 4_200],
  ['cover for one', { eyes: { OD: eye('lasik -3.00', 'c24'), OS: eye('lasik -2.50') } }, '4,040 + 80', 4_120],
  ['an assessment', { addOns: forBoth('assessment') }, '4,040 + 120', 4_160],
  ['a nurse, one session', { addOns: forBoth('nurse') }, '4,040 + 60', 4_100],
  ['a nurse, two sessions', { addOns: forBoth('nurse'), surgery: staged(30) }, '4,140 + 2 × 60', 4_260],
  ['goods with tax included', { addOns: forBoth('drops') }, '4,040 + 30, 5.00 of it tax', 4_070],
  [
    'goods with tax on top',
    { addOns: [{ addOnId: 'lens-care', laterality: 'OD' }] },
    '4,040 + 24 + 10 %',
    4_066.4,
  ],
  [
    'goods with tax on top for both eyes, rounded line by line',
    {
      addOns: [
        { addOnId: 'lens-care', laterality: 'OD' },
        { addOnId: 'lens-care', laterality: 'OS' },
      ],
      discounts: [],
      priceListId: 'staff',
    },
    '3,838 + 2 × (22.80 + 2.28)',
    3_888.16,
  ],
  ['a package', { packageId: 'all-in' }, '4,100 for parts of 4,040 + 120 + 160', 4_100],
  [
    'a package that covers the band but not the marking',
    { packageId: 'all-in', eyes: { OD: eye('lasik -2.00 -1.50 x 75'), OS: eye('lasik -2.50') } },
    '4,100 + 50',
    4_150,
  ],
  [
    'a package dearer than its parts: the parts',
    { packageId: 'all-in', eyes: both('surface -3.00') },
    '3,040 + 120 + 160',
    3_320,
  ],
  [
    'a package at a rate, one eye',
    { packageId: 'single', eyes: { OD: eye('lasik -3.00'), OS: null } },
    '(2,000 + 240 + 120) − 10 %',
    2_124,
  ],
  ['a package and goods', { packageId: 'all-in', addOns: forBoth('drops') }, '4,100 + 30', 4_130],
  ['a rate for staff', { priceListId: 'staff' }, '4,040 − 5 %', 3_838],
  ['prices of a list', { priceListId: 'ferries' }, '1,800 + 1,800 − 10 % of 1,800 + 240', 3_660],
  ['goodwill within the limit', { discounts: [rate('goodwill', 5)] }, '4,040 − 5 % of 3,800', 3_850],
  ['goodwill over the own limit', { discounts: [rate('goodwill', 12)] }, '4,040 − 12 % of 3,800', 3_584],
  ['an amount off', { discounts: [euros('family', 100)] }, '4,040 − 100', 3_940],
  [
    'a list, a rate and an amount, one after the other',
    { priceListId: 'staff', discounts: [euros('family', 100), rate('goodwill', 5)] },
    '1,805 + 1,624.50 − 100 + 228',
    3_557.5,
  ],
  [
    'a discount on a package',
    { packageId: 'all-in', discounts: [rate('goodwill', 5)] },
    '4,100 − 205',
    3_895,
  ],
  [
    'visits elsewhere: two here, no cover',
    { eyes: both('lasik -3.00', 'c24'), discounts: [euros('own-optometrist', 80)] },
    '2,000 + 1,800 − 80 + 90',
    3_810,
  ],
  ['ten instalments at no charge', { paymentPlanId: 'ten' }, '4,040', 4_040],
  ['two years at 9.9 %', { paymentPlanId: 'two-years' }, '4,040 + 429.74', 4_469.74],
  ['a lender', { paymentPlanId: 'lender' }, '4,040', 4_040],
];

function swap(input: CourseInput): CourseInput {
  const { surgery } = input;
  const side = { OD: 'OS', OS: 'OD', OU: 'OU' } as const;
  return {
    ...input,
    eyes: { OD: input.eyes.OS, OS: input.eyes.OD },
    surgery:
      surgery.plan === 'staged' ? { plan: 'staged', on: { OD: surgery.on.OS, OS: surgery.on.OD } } : surgery,
    addOns: input.addOns.map(({ addOnId, laterality }) => ({ addOnId, laterality: side[laterality] })),
  };
}

function turn(input: CourseInput): CourseInput {
  const other = (wish: CourseInput['eyes']['OD']) =>
    wish && { ...wish, prescription: transpose(wish.prescription) };
  return { ...input, eyes: { OD: other(input.eyes.OD), OS: other(input.eyes.OS) } };
}

function priced(input: CourseInput): PricedCourse {
  const result = quoteCourse(input, goldenBook);
  if (!result.ok) throw new Error(JSON.stringify(result.refusals));
  return result.course;
}

describe('courses checked by hand', () => {
  test('there are at least forty of them', () => expect(COURSES.length).toBeGreaterThanOrEqual(40));
  for (const [what, asked, sum, total] of COURSES) {
    test(`${what} · ${sum} · ${total}`, () => {
      const input = courseInput(asked);
      const ways = [input, turn(input), swap(input), turn(swap(input))];
      const totals = ways.map((each) => formatAmount(priced(each).totalMinor, goldenBook.currency));
      expect(totals).toEqual(Array(4).fill(formatAmount(eur(total), goldenBook.currency)));
    });
  }
});

/** Line ids and amounts of a course. */
function lines(asked: Partial<CourseInput>): Record<string, string> {
  const found = priced(courseInput(asked)).lines.map(({ id, amountMinor }) => [
    id,
    formatAmount(amountMinor, goldenBook.currency),
  ]);
  return Object.fromEntries(found);
}

describe('the lines of a course', () => {
  test('a list, a rate and an amount · come off one after the other, line by line', () => {
    expect(lines({ priceListId: 'staff', discounts: [euros('family', 100), rate('goodwill', 5)] })).toEqual({
      'surgery:OD': '2,000.00',
      'surgery:OS': '2,000.00',
      'second-eye:OS': '−200.00',
      'aftercare:visits:OU': '240.00',
      'price-list:staff:OD': '−100.00',
      'price-list:staff:OS': '−90.00',
      'price-list:staff:OU': '−12.00',
      'discount:goodwill:OD': '−95.00',
      'discount:goodwill:OS': '−85.50',
      'discount:family:OD': '−52.63',
      'discount:family:OS': '−47.37',
    });
  });
  test('tax on top · stands in lines of its own', () => {
    expect(lines({ addOns: [{ addOnId: 'lens-care', laterality: 'OD' }] })).toMatchObject({
      'add-on:lens-care:OD': '24.00',
      'tax:on-top:1000:OD': '2.40',
    });
  });
  test('a package · is one line, its parts in the derivation', () => {
    const course = priced(courseInput({ packageId: 'all-in' }));
    expect(course.lines.map(({ id }) => id)).toEqual(['package:all-in:OU']);
    const [line] = course.lines;
    expect(line?.why.at(-2)).toEqual({ label: 'Parts by themselves', amountMinor: eur(4_520) });
    expect(course.package).toMatchObject({
      partsMinor: eur(4_320),
      savesMinor: eur(220),
      chargedAsParts: false,
    });
  });
  test('conversion on the day · the left eye surface ablation instead · costs 420.00 less', () => {
    const planned = priced(courseInput());
    const done = priced(courseInput({ eyes: { OD: eye('lasik -3.00'), OS: eye('surface -2.50') } }));
    expect(done.totalMinor - planned.totalMinor).toBe(eur(-420));
  });
});

describe('which eye is the second', () => {
  const secondEye = [
    {
      id: 'pair-lasik-lenticule',
      label: 'LASIK and lenticule extraction',
      procedureIds: ['lasik', 'lenticule'] as const,
      sameSession: { kind: 'rate' as const, rateBp: 1_000 },
      staged: null,
      ifNever: null,
    },
  ];
  test('one day · the one with the cheaper procedure, on whichever side', () => {
    for (const [side, eyes] of [
      ['OS', { OD: eye('lenticule -3.00'), OS: eye('lasik -3.00') }],
      ['OD', { OD: eye('lasik -3.00'), OS: eye('lenticule -3.00') }],
    ] as const) {
      const result = quoteCourse(courseInput({ eyes }), { ...goldenBook, secondEye });
      const off = result.ok ? result.course.lines.find(({ kind }) => kind === 'second_eye') : undefined;
      expect([off?.laterality, off?.amountMinor]).toEqual([side, eur(-200)]);
    }
  });
});

test('a quote that holds thirty days · holds through the thirtieth, the day of issue being the first', () => {
  expect(priced(courseInput()).validUntil).toBe('2026-04-10');
});

describe('tax of a course', () => {
  const withDrops = (on: string) =>
    priced(courseInput({ addOns: forBoth('drops'), surgery: { plan: 'same_session', on: clinicDate(on) } }))
      .taxes;
  test('included · is taken out of the price at the rate of the day of surgery', () => {
    const goods = { taxClassId: 'in', stated: 'included', grossMinor: eur(30) };
    expect(withDrops('2026-04-16')[1]).toMatchObject({
      ...goods,
      rateBp: 2_000,
      netMinor: eur(25),
      taxMinor: eur(5),
    });
    expect(withDrops('2026-05-01')[1]).toMatchObject({
      ...goods,
      rateBp: 2_500,
      netMinor: eur(24),
      taxMinor: eur(6),
    });
  });
  test('exempt · carries its reason and no tax', () => {
    expect(withDrops('2026-04-16')[0]).toMatchObject({
      taxClassId: 'care',
      exemptionReason: 'Medical care',
      taxMinor: 0,
      grossMinor: eur(4_040),
    });
  });
});

/** Ids, days and amounts of the schedule. */
function schedule(asked: Partial<CourseInput>): string[] {
  return priced(courseInput(asked)).schedule.map(
    ({ id, dueOn, amountMinor }) => `${id} ${dueOn} ${formatAmount(amountMinor, goldenBook.currency)}`,
  );
}

describe('the schedule of a course', () => {
  test('one day · a deposit up to its ceiling, the balance two weeks before', () => {
    expect(schedule({})).toEqual(['deposit 2026-03-12 400.00', 'balance 2026-04-02 3,640.00']);
  });
  test('staged · each eye before its own day', () => {
    expect(schedule({ surgery: staged(30) })).toEqual([
      'deposit 2026-03-12 400.00',
      'balance-first 2026-04-02 1,840.00',
      'balance-second 2026-05-02 1,900.00',
    ]);
  });
  test('a day too near · the balance is due at once', () => {
    expect(schedule({ surgery: { plan: 'same_session', on: clinicDate('2026-03-20') } })).toEqual([
      'deposit 2026-03-12 400.00',
      'balance 2026-03-12 3,640.00',
    ]);
  });
  test('accepted later · days count from then', () => {
    expect(schedule({ acceptedOn: clinicDate('2026-03-20') })[0]).toBe('deposit 2026-03-20 400.00');
  });
  test('ten instalments · after the deposit, a month apart', () => {
    const dues = schedule({ paymentPlanId: 'ten' });
    expect(dues.slice(0, 2)).toEqual(['deposit 2026-03-12 400.00', 'instalment-1 2026-04-12 364.00']);
    expect(dues.at(-1)).toBe('instalment-10 2027-01-12 364.00');
  });
  test('two years · the charge is split evenly with the price, its rates are shown', () => {
    const dues = schedule({ paymentPlanId: 'two-years' });
    expect(dues[0]).toBe('instalment-1 2026-04-12 186.24');
    expect(dues.at(-1)).toBe('instalment-24 2028-03-12 186.23');
    const { credit } = priced(courseInput({ paymentPlanId: 'two-years' }));
    // (1 + 0.099/12)^12 − 1 = 10.36 %, from memory of the formula, our arithmetic
    expect(credit).toMatchObject({ chargeMinor: eur(429.74), nominalRateBp: 990, aprBp: 1_036 });
  });
  test('a lender · pays the balance in the patient’s place', () => {
    const { schedule: dues, credit } = priced(courseInput({ paymentPlanId: 'lender' }));
    expect(dues.map(({ id, from }) => [id, from])).toEqual([
      ['deposit', 'patient'],
      ['lender', 'lender'],
    ]);
    expect(credit).toMatchObject({ creditMinor: eur(3_640), chargeMinor: 0, aprBp: 0 });
  });
});

describe('the ladder of a course', () => {
  const rows = (asked: Partial<CourseInput>) =>
    priced(courseInput(asked)).cancellation.map(({ event, until, keptMinor, comesBackMinor }) => [
      event,
      until,
      keptMinor / 100,
      comesBackMinor === null ? 'all' : comesBackMinor / 100,
    ]);
  test('one day · reflection, two rungs, the day itself', () => {
    // 10 % deposit 400; 50 an eye; 20 % and 50 % of 4,040
    expect(rows({})).toEqual([
      ['reflection', '2026-03-26', 0, 400],
      ['cancels', '2026-04-02', 100, 300],
      ['cancels', '2026-04-15', 808, 3_232],
      ['no_show', '2026-04-16', 2_020, 2_020],
      ['unsuitable', null, 0, 'all'],
      ['clinic_cancels', null, 0, 'all'],
      ['moves', null, 0, 'all'],
    ]);
  });
  test('staged · each eye stands on its own rung, after the first only the second is left', () => {
    // Right eye's share 2,000 + 240, left eye's 1,900.
    expect(rows({ surgery: staged(30) }).slice(1, 7)).toEqual([
      ['cancels', '2026-04-02', 100, 300],
      ['cancels', '2026-04-15', 498, 1_742],
      ['no_show', '2026-04-16', 1_170, 1_070],
      ['cancels', '2026-05-02', 50, 0],
      ['cancels', '2026-05-15', 380, 1_520],
      ['no_show', '2026-05-16', 950, 950],
    ]);
  });
  test('a day inside the time to reflect · everything comes back until it, and on it', () => {
    // Due at once: deposit 400 and balance 3,640.
    expect(rows({ surgery: { plan: 'same_session', on: clinicDate('2026-03-20') } }).slice(0, 3)).toEqual([
      ['reflection', '2026-03-19', 0, 4_040],
      ['no_show', '2026-03-20', 0, 4_040],
      ['unsuitable', null, 0, 'all'],
    ]);
  });
  test('no day agreed · by days before surgery', () => {
    const course = priced(courseInput({ surgery: { plan: 'same_session', on: null } }));
    const found = course.cancellation.map(({ detail, comesBackMinor }) => [detail, comesBackMinor]);
    expect(found.slice(1, 3)).toEqual([
      ['14 days or more before surgery', eur(300)],
      ['1 day or more before surgery', eur(3_232)],
    ]);
  });
});

describe('obligations of a course', () => {
  test('the worked package of 4,990.00 · is allocated to the cent', () => {
    const book = {
      ...goldenBook,
      procedures: goldenBook.procedures.map((each) => ({
        ...each,
        priceMinor: eur(2_400),
        standAloneMinor: eur(2_400),
      })),
      followUps: goldenBook.followUps.map((each) => ({
        ...each,
        priceMinor: eur(300),
        standAloneMinor: eur(300),
      })),
      covers: goldenBook.covers.map((each) => ({ ...each, priceMinor: eur(90), standAloneMinor: eur(90) })),
      addOns: goldenBook.addOns.map((each) => ({ ...each, priceMinor: eur(150), standAloneMinor: eur(150) })),
      packages: goldenBook.packages.map((each) => ({
        ...each,
        price: { kind: 'amount' as const, amountMinor: eur(4_990) },
      })),
    };
    const result = quoteCourse(courseInput({ packageId: 'all-in' }), book);
    if (!result.ok) throw new Error(JSON.stringify(result.refusals));
    expect(result.course.totalMinor).toBe(eur(4_990));
    const allocated = result.course.obligations.map(({ id, standAloneMinor, allocatedMinor }) => [
      id,
      standAloneMinor / 100,
      allocatedMinor / 100,
    ]);
    expect(allocated).toEqual([
      ['assessment', 150, 137.85],
      ['surgery:OD', 2_400, 2_205.53],
      ['surgery:OS', 2_400, 2_205.52],
      ['aftercare', 300, 275.69],
      ['enhancement', 180, 165.41],
    ]);
    const parts = (id: string) =>
      result.course.obligations.find((each) => each.id === id)?.parts.map(({ amountMinor }) => amountMinor);
    expect(parts('aftercare')).toEqual([4_595, 4_595, 4_595, 4_595, 4_595, 4_594]);
    expect(parts('enhancement')).toEqual([8_271, 8_270]);
  });
  test('policy A · everything at the eyes’ surgery', () => {
    const result = quoteCourse(courseInput(), { ...goldenBook, allocationPolicy: 'A' });
    const found = result.ok
      ? result.course.obligations.map(({ id, allocatedMinor }) => [id, allocatedMinor])
      : [];
    expect(found).toEqual([
      ['surgery:OD', eur(2_020)],
      ['surgery:OS', eur(2_020)],
      ['aftercare', 0],
    ]);
  });
});

describe('cover of a course', () => {
  test('each eye · from and until count from its own surgery', () => {
    const course = priced(courseInput({ eyes: both('lasik -3.00', 'c24'), surgery: staged(30) }));
    expect(course.cover.map(({ eye: side, from, until, count }) => [side, from, until, count])).toEqual([
      ['OD', '2026-07-16', '2028-04-16', 1],
      ['OS', '2026-08-16', '2028-05-16', 1],
    ]);
  });
  test('a discount that changes the aftercare · takes the cover and says so', () => {
    const course = priced(
      courseInput({ eyes: both('lasik -3.00', 'c24'), discounts: [euros('own-optometrist', 80)] }),
    );
    expect(course.cover).toEqual([]);
    expect(course.included).toEqual([{ ruleId: 'short', label: 'Two visits' }]);
    expect(course.warnings.map(({ code }) => code)).toContain('aftercare_changed');
  });
});
