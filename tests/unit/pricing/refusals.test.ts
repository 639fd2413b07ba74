import { describe, expect, test } from 'vitest';
import { minor } from '#domain/money/index';
import { type CourseInput, quoteCourse } from '#domain/pricing/index';
import { clinicDate } from '#domain/time/index';
import { courseInput, eye, QUOTED_ON, staged } from '#tests/factories/courses';
import { eur, goldenBook } from '#tests/factories/golden-book';

const rate = (discountId: string, rateBp: number) => ({ discountId, off: { kind: 'rate' as const, rateBp } });
const amount = (discountId: string, euros: number) => ({
  discountId,
  off: { kind: 'amount' as const, amountMinor: eur(euros) },
});
const plan = {
  approvedBy: 'Dr Brannock',
  approvedOn: clinicDate('2026-03-01'),
  expiresOn: clinicDate('2026-06-01'),
  procedureIds: { OD: ['lasik'], OS: ['surface'] },
};
const prescribed = (cylinderMd: number | null, axisDeg: number | null): CourseInput['eyes'] => ({
  OD: { ...eye('lasik -3.00'), prescription: { sphereMd: -3_000, cylinderMd, axisDeg, vertexMm: 12 } },
  OS: null,
});

const REFUSED: readonly [what: string, asked: Partial<CourseInput>, found: string[]][] = [
  ['neither eye', { eyes: { OD: null, OS: null } }, ['eyes no_eye']],
  [
    'an unknown procedure',
    { eyes: { OD: eye('magic -3.00'), OS: null } },
    ['eyes.OD.procedureId unknown_rule'],
  ],
  [
    'an unknown cover',
    { eyes: { OD: eye('lasik -3.00', 'c99'), OS: null } },
    ['eyes.OD.coverId unknown_rule'],
  ],
  [
    'a cylinder without an axis',
    { eyes: prescribed(-1_000, null) },
    ['eyes.OD.prescription.axis prescription'],
  ],
  ['an axis without a cylinder', { eyes: prescribed(null, 90) }, ['eyes.OD.prescription.axis prescription']],
  ['an eighth of cylinder', { eyes: prescribed(-1_125, 90) }, ['eyes.OD.prescription.cylinder prescription']],
  [
    'a cylinder beyond the bands',
    { eyes: { OD: eye('lasik +2.00 -6.25 x 90'), OS: null } },
    ['eyes.OD.prescription.cylinder no_band'],
  ],
  [
    'a sphere beyond the bands',
    { eyes: { OD: eye('lasik -10.25'), OS: null } },
    ['eyes.OD.prescription.sphere no_band'],
  ],
  ['a procedure not approved for that eye', { approvedPlan: plan }, ['eyes.OS.procedureId not_approved']],
  [
    'staged without a day',
    { surgery: { plan: 'staged', on: { OD: QUOTED_ON, OS: null } } },
    ['surgery.on.OS dates_needed'],
  ],
  [
    'a day before the quote',
    { surgery: { plan: 'same_session', on: clinicDate('2026-03-11') } },
    ['surgery.on date_in_the_past', 'surgery.on date_in_the_past'],
  ],
  [
    'accepted before it was quoted',
    { acceptedOn: clinicDate('2026-03-01') },
    ['acceptedOn date_in_the_past'],
  ],
  [
    'an unknown add-on',
    { addOns: [{ addOnId: 'tea', laterality: 'OU' }] },
    ['addOns.0.addOnId unknown_rule'],
  ],
  [
    'an add-on per eye for both together',
    { addOns: [{ addOnId: 'lens-care', laterality: 'OU' }] },
    ['addOns.0.laterality wrong_laterality'],
  ],
  [
    'an add-on per course for one eye',
    { addOns: [{ addOnId: 'drops', laterality: 'OD' }] },
    ['addOns.0.laterality wrong_laterality'],
  ],
  [
    'an add-on for an eye that is not treated',
    { eyes: { OD: eye('lasik -3.00'), OS: null }, addOns: [{ addOnId: 'lens-care', laterality: 'OS' }] },
    ['addOns.0.laterality eye_not_treated'],
  ],
  [
    'an add-on twice',
    {
      addOns: [
        { addOnId: 'drops', laterality: 'OU' },
        { addOnId: 'drops', laterality: 'OU' },
      ],
    },
    ['addOns.1 twice'],
  ],
  ['an unknown package', { packageId: 'p' }, ['packageId unknown_rule']],
  ['a package for one eye', { packageId: 'single' }, ['packageId package_does_not_fit']],
  [
    'a package without that procedure',
    { packageId: 'all-in', eyes: { OD: eye('lenticule -3.00'), OS: eye('lasik -3.00') } },
    ['eyes.OD.procedureId package_does_not_fit'],
  ],
  [
    'a package whose aftercare a discount changes',
    { packageId: 'all-in', discounts: [amount('own-optometrist', 80)] },
    ['discounts.0 package_does_not_fit'],
  ],
  ['an unknown list', { priceListId: 'club' }, ['priceListId unknown_rule']],
  ['an unknown discount', { discounts: [rate('luck', 100)] }, ['discounts.0 unknown_rule']],
  [
    'two of one stacking group',
    { discounts: [amount('family', 50), amount('own-optometrist', 80)] },
    ['discounts.1 discounts_do_not_combine'],
  ],
  [
    'a discount on a list that stands alone',
    { priceListId: 'ferries', discounts: [rate('goodwill', 100)] },
    ['discounts.0 discounts_do_not_combine'],
  ],
  [
    'a rate where an amount is given',
    { discounts: [rate('family', 100)] },
    ['discounts.0.off discount_kind'],
  ],
  [
    'a discount beyond the approver',
    { discounts: [rate('goodwill', 1_501)] },
    ['discounts.0.off discount_over_limit'],
  ],
  ['a discount of nothing', { discounts: [rate('goodwill', 0)] }, ['discounts.0.off discount_over_limit']],
  [
    'a discount below nothing',
    { discounts: [rate('goodwill', -100)] },
    ['discounts.0.off discount_over_limit'],
  ],
  [
    'a discount in fractions',
    { discounts: [rate('goodwill', 1.5)] },
    ['discounts.0.off discount_over_limit'],
  ],
  ['an unknown plan', { paymentPlanId: 'later' }, ['paymentPlanId unknown_rule']],
  [
    'several things at once',
    { priceListId: 'club', packageId: 'p', paymentPlanId: 'later' },
    ['priceListId unknown_rule', 'packageId unknown_rule', 'paymentPlanId unknown_rule'],
  ],
];

describe('a course that cannot be priced', () => {
  for (const [what, asked, expected] of REFUSED) {
    test(`${what} · is refused · naming the field and what to change`, () => {
      const result = quoteCourse(courseInput(asked), goldenBook);
      if (result.ok) throw new Error('It was priced.');
      expect(result.refusals.map(({ field, code }) => `${field} ${code}`)).toEqual(expected);
      for (const { words, change } of result.refusals)
        expect([words, change].every((text) => text.length > 5)).toBe(true);
    });
  }
  test('a plan of payment · for a sum too small · is refused', () => {
    const book = {
      ...goldenBook,
      paymentPlans: goldenBook.paymentPlans.map((each) => ({ ...each, leastMinor: eur(5_000) })),
    };
    const result = quoteCourse(courseInput({ paymentPlanId: 'ten' }), book);
    expect(result).toMatchObject({
      ok: false,
      refusals: [{ field: 'paymentPlanId', code: 'plan_needs_more' }],
    });
  });
  test('a tax class without a rate on the day · is refused', () => {
    const book = { ...goldenBook, taxClasses: goldenBook.taxClasses.map((each) => ({ ...each, rates: [] })) };
    const result = quoteCourse(courseInput({ addOns: [{ addOnId: 'drops', laterality: 'OU' }] }), book);
    expect(result).toMatchObject({ ok: false, refusals: [{ code: 'no_tax_rate' }] });
  });
});

/** Standing and warnings of a course. */
function standing(asked: Partial<CourseInput>): string[] {
  const result = quoteCourse(courseInput(asked), goldenBook);
  return result.ok
    ? [result.course.standing, ...result.course.warnings.map(({ code }) => code)]
    : ['refused'];
}

describe('what a course warns of', () => {
  const approved = { ...plan, procedureIds: { OD: ['lasik'], OS: ['lasik'] } };
  test('no plan of the surgeon · an estimate', () => {
    expect(standing({ eyes: { OD: eye('lasik -3.00'), OS: null } })).toEqual(['estimate', 'estimate']);
  });
  test('a plan that covers it · is quotable, with the condition on the second eye', () => {
    expect(standing({ approvedPlan: approved })).toEqual(['quotable', 'second_eye_condition']);
  });
  test('a plan past its day · an estimate again', () => {
    const expired = { ...approved, expiresOn: clinicDate('2026-03-11') };
    expect(standing({ approvedPlan: expired })).toEqual(['estimate', 'plan_expired', 'second_eye_condition']);
  });
  test('a plan that ends before the surgery · is said for that eye', () => {
    const found = standing({ approvedPlan: approved, surgery: staged(60) });
    expect(found).toEqual(['quotable', 'plan_expires_before_surgery', 'second_eye_condition']);
  });
  test('staged too far apart · the missed reduction is said', () => {
    expect(standing({ surgery: staged(91) })).toContain('second_eye_reduction_missed');
  });
  test('a discount over the own limit · needs approval, with asked and limits', () => {
    const result = quoteCourse(courseInput({ discounts: [rate('goodwill', 1_200)] }), goldenBook);
    expect(result.ok && result.course.approvals).toEqual([
      {
        discountId: 'goodwill',
        reason: 'Goodwill',
        asked: '12\u00a0%',
        ownLimit: '5\u00a0%',
        approverLimit: '15\u00a0%',
      },
    ]);
    expect(standing({ discounts: [rate('goodwill', 1_200)] })).toContain('approval_needed');
  });
  test('a package no cheaper than its parts · is said', () => {
    const eyes = { OD: eye('surface -3.00'), OS: eye('surface -3.00') };
    expect(standing({ packageId: 'all-in', eyes })).toContain('package_no_cheaper');
  });
  test('instalments within the year · say nothing, later ones do', () => {
    expect(standing({ paymentPlanId: 'ten' })).not.toContain('not_interest_free_exempt');
    const plans = goldenBook.paymentPlans.map((each) => ({ ...each, instalments: 12 }));
    const result = quoteCourse(courseInput({ paymentPlanId: 'ten' }), { ...goldenBook, paymentPlans: plans });
    expect(result.ok && result.course.warnings.map(({ code }) => code)).toContain('not_interest_free_exempt');
  });
  test('a supplement if the second eye never happens · is named in money', () => {
    const secondEye = goldenBook.secondEye.map((each) => ({
      ...each,
      ifNever: { kind: 'supplement' as const, amountMinor: minor(15_000) },
    }));
    const result = quoteCourse(courseInput(), { ...goldenBook, secondEye });
    const words = result.ok ? result.course.warnings.map((warning) => warning.words).join(' ') : '';
    expect(words).toContain('150.00 is added to the first');
  });
});
