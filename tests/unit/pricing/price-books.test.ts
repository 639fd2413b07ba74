import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { minor } from '#domain/money/index';
import { diffPriceBooks, type PriceBook, validatePriceBook } from '#domain/pricing/index';
import { clinicDate } from '#domain/time/index';
import { demoPriceBook } from '#seeds/price-book';
import { eur, goldenBook } from '#tests/factories/golden-book';
import { anyPriceBook, CASES } from '#tests/factories/price-books';

/** Codes of a book's errors. */
function errors(book: PriceBook): string[] {
  return validatePriceBook(book)
    .filter(({ severity }) => severity === 'error')
    .map(({ code, field }) => `${code} ${field}`);
}

/** A book with one member of one rule changed. */
function changed<Section extends keyof PriceBook>(
  section: Section,
  index: number,
  change: Record<string, unknown>,
): PriceBook {
  const rules = goldenBook[section] as readonly Record<string, unknown>[];
  return {
    ...goldenBook,
    [section]: rules.map((rule, at) => (at === index ? { ...rule, ...change } : rule)),
  };
}

const FAULTS: readonly [what: string, book: PriceBook, expected: string][] = [
  ['no procedure', { ...goldenBook, procedures: [] }, 'no_procedure procedures'],
  ['two rules of one id', changed('addOns', 1, { id: 'drops' }), 'duplicate_id '],
  [
    'a procedure of an unknown tax class',
    changed('procedures', 0, { taxClassId: 'x' }),
    'unknown_reference procedures.0.taxClassId',
  ],
  [
    'a band that requires an unknown add-on',
    changed('bands', 0, { requiresAddOnIds: ['x'] }),
    'unknown_reference bands.0.requiresAddOnIds',
  ],
  [
    'a package with an unknown cover',
    changed('packages', 0, { includes: { bands: true, aftercare: true, addOnIds: [], coverId: 'x' } }),
    'unknown_reference packages.0.includes.coverId',
  ],
  [
    'a list that prices an unknown rule',
    changed('priceLists', 1, { rule: { kind: 'prices', prices: { x: 1 } } }),
    'unknown_reference priceLists.1.rule.prices',
  ],
  [
    'a price below nothing',
    changed('procedures', 0, { priceMinor: -1 }),
    'bad_amount procedures.0.priceMinor',
  ],
  [
    'a price in fractions',
    changed('procedures', 0, { priceMinor: 0.5 }),
    'bad_amount procedures.0.priceMinor',
  ],
  [
    'a rate over all',
    changed('priceLists', 0, { rule: { kind: 'rate', rateBp: 10_001, scope: 'everything' } }),
    'bad_rate priceLists.0.rule.rateBp',
  ],
  ['no instalment', changed('paymentPlans', 0, { instalments: 0 }), 'bad_number paymentPlans.0.instalments'],
  [
    'a band that holds nothing',
    changed('bands', 0, { fromMd: 1_600, toMd: 1_700 }),
    'empty_band bands.0.toMd',
  ],
  ['overlapping bands', changed('bands', 1, { fromMd: 2_500 }), 'overlapping_bands bands.1.fromMd'],
  [
    'an edge that belongs to both',
    changed('bands', 0, { toIncluded: true }),
    'overlapping_bands bands.1.fromMd',
  ],
  [
    'an edge that belongs to neither',
    changed('bands', 1, { fromIncluded: false }),
    'gap_between_bands bands.0',
  ],
  ['a gap', changed('bands', 1, { fromMd: 3_500 }), 'gap_between_bands bands.0'],
  [
    'a second-eye rule without its fallback',
    changed('secondEye', 0, { ifNever: null }),
    'second_eye_without_fallback secondEye.0.ifNever',
  ],
  [
    'a second-eye rule that takes nothing off',
    changed('secondEye', 1, { sameSession: null }),
    'second_eye_without_reduction secondEye.1',
  ],
  [
    'two rules for one pair',
    changed('secondEye', 1, { procedureIds: ['surface', 'lasik'] }),
    'second_eye_twice secondEye.2',
  ],
  [
    'a cover without a price after it',
    changed('covers', 0, { priceOutOfCoverMinor: null }),
    'cover_without_price_after covers.0.priceOutOfCoverMinor',
  ],
  [
    'a cover that ends before it begins',
    changed('covers', 0, { earliestMonth: 24 }),
    'cover_months covers.0.earliestMonth',
  ],
  [
    'an exemption without a reason',
    changed('taxClasses', 0, { exemptionReason: ' ' }),
    'exempt_without_reason taxClasses.0.exemptionReason',
  ],
  [
    'a tax without a rate in time',
    changed('taxClasses', 1, { rates: [{ from: '2026-05-01', rateBp: 2_000 }] }),
    'tax_without_rate taxClasses.1.rates',
  ],
  [
    'two rates from one day',
    changed('taxClasses', 1, {
      rates: [
        { from: '2020-01-01', rateBp: 1 },
        { from: '2020-01-01', rateBp: 2 },
      ],
    }),
    'tax_rate_twice taxClasses.1.rates',
  ],
  ['surgery priced per course', changed('addOns', 0, { per: 'course' }), 'add_on_not_per_eye addOns.0.per'],
  [
    'limits the wrong way round',
    changed('discounts', 0, {
      off: { kind: 'rate', scope: 'surgery', ownLimitBp: 2_000, approverLimitBp: 100 },
    }),
    'limits_reversed discounts.0.off',
  ],
  [
    'a floor over the ceiling',
    { ...goldenBook, deposit: { ...goldenBook.deposit, floorMinor: eur(500) } },
    'deposit_limits_reversed deposit.floorMinor',
  ],
  [
    'rungs out of order',
    {
      ...goldenBook,
      cancellation: { ...goldenBook.cancellation, rungs: [...goldenBook.cancellation.rungs].reverse() },
    },
    'ladder_order cancellation.rungs.1.minDaysBefore',
  ],
  [
    'a ladder that stops early',
    {
      ...goldenBook,
      cancellation: { ...goldenBook.cancellation, rungs: goldenBook.cancellation.rungs.slice(0, 1) },
    },
    'ladder_end cancellation.rungs',
  ],
];

describe('a price book', () => {
  test('sound books · have no errors', () => {
    expect(errors(goldenBook)).toEqual([]);
    expect(errors(demoPriceBook)).toEqual([]);
  });
  test('any sound book · has no errors', () => {
    fc.assert(
      fc.property(anyPriceBook, (book) => {
        const found = errors(book).filter(
          (each) => !each.startsWith('deposit_limits') && !each.startsWith('empty_band'),
        );
        expect(found).toEqual([]);
      }),
      { numRuns: Math.min(CASES, 200) },
    );
  });
  for (const [what, book, expected] of FAULTS) {
    test(`${what} · is an error · that says what to change`, () => {
      expect(errors(book)).toContain(expected);
      for (const { words, change } of validatePriceBook(book))
        expect([words, change].every((text) => text.length > 5)).toBe(true);
    });
  }
  test('what only deserves a look · is a notice', () => {
    const notices = validatePriceBook(goldenBook).map(({ code }) => code);
    expect(new Set(notices)).toEqual(new Set(['bands_end', 'second_eye_missing', 'package_without_saving']));
  });
});

describe('a draft against the book in force', () => {
  test('the same · nothing', () => {
    const copy = JSON.parse(JSON.stringify(goldenBook)) as PriceBook;
    expect(diffPriceBooks(goldenBook, copy)).toEqual([]);
  });
  test('a price, a band, a new add-on, a rule gone, a setting · are told one by one', () => {
    const [lasik, ...others] = goldenBook.procedures;
    const [gone, ...discounts] = goldenBook.discounts;
    const [drops] = goldenBook.addOns;
    if (!lasik || !gone || !drops) throw new Error('The golden book lacks rules.');
    const draft: PriceBook = {
      ...goldenBook,
      version: 2,
      inForceFrom: clinicDate('2026-06-01'),
      procedures: [{ ...lasik, priceMinor: eur(2_100) }, ...others],
      bands: goldenBook.bands.map((band) => ({
        ...band,
        charge: { kind: 'amount', amountMinor: minor(9_900) },
      })),
      addOns: [...goldenBook.addOns, { ...drops, id: 'lamp', label: 'Lamp' }],
      discounts,
      validityDays: 45,
    };
    const changes = diffPriceBooks(goldenBook, draft).map(({ change, section, ruleId, fields }) => [
      change,
      section,
      ruleId,
      fields.map(({ path, before, after }) => `${path}: ${before} → ${after}`),
    ]);
    expect(changes).toEqual([
      ['changed', 'procedures', 'lasik', ['priceMinor: 200000 → 210000']],
      ['changed', 'bands', 'cyl-1.5', ['charge.amountMinor: 10000 → 9900']],
      [
        'changed',
        'bands',
        'cyl-3',
        [
          'charge.amountMinor: undefined → 9900',
          'charge.kind: rate → amount',
          'charge.rateBp: 1000 → undefined',
        ],
      ],
      ['changed', 'bands', 'mer-6', ['charge.amountMinor: 15000 → 9900']],
      ['added', 'addOns', 'lamp', []],
      ['removed', 'discounts', 'goodwill', []],
      ['changed', 'inForceFrom', null, [': 2026-01-01 → 2026-06-01']],
      ['changed', 'validityDays', null, [': 30 → 45']],
    ]);
  });
});
