import { describe, expect, test } from 'vitest';
import { quoteCosts } from '#domain/pricing/costs';
import {
  canonicalJson,
  contentKey,
  explainLine,
  formatRate,
  keptByLadder,
  quoteCourse,
} from '#domain/pricing/index';
import { addDays } from '#domain/time/index';
import { courseInput, eye, QUOTED_ON, SURGERY_ON } from '#tests/factories/courses';
import { eur, goldenBook } from '#tests/factories/golden-book';

function priced(asked: Parameters<typeof courseInput>[0]) {
  const result = quoteCourse(courseInput(asked), goldenBook);
  if (!result.ok) throw new Error(JSON.stringify(result.refusals));
  return result.course;
}

describe('the margin beside a figure', () => {
  test('a band · tells the entry, the minus form, the size, the band and the line of the book', () => {
    const course = priced({ eyes: { OD: eye('lasik -3.50 +1.50 x 165'), OS: null } });
    const line = course.lines.find(({ kind }) => kind === 'band');
    expect(line && explainLine(line, course)).toEqual({
      title: '100.00 for the right eye',
      steps: [
        { label: 'Entered', text: '−3.50 +1.50 × 165' },
        { label: 'Minus-cylinder form', text: '−2.00 −1.50 × 75' },
        { label: 'Cylinder', text: '1.50 D' },
        { label: 'Band "cylinder [1.50, 3.00)", per eye', amountMinor: eur(100) },
        { label: 'Price book 1, line 7', text: 'since 1 January 2026', rule: 'cyl-1.5', version: 'golden 1' },
      ],
    });
  });
  test('a meridian and a rate · have their own words', () => {
    const course = priced({ eyes: { OD: eye('lasik -7.00 -3.00 x 10'), OS: null } });
    const texts = course.lines
      .filter(({ kind }) => kind === 'band')
      .map((line) => explainLine(line, course).steps.map(({ text }) => text));
    expect(texts[0]).toContain('10\u00a0%');
    expect(texts[1]).toContain('−10.00 D');
  });
  test('rates · are written as people write them', () => {
    expect([1_000, 450, 969, 1, 0, -50].map(formatRate)).toEqual([
      '10\u00a0%',
      '4.5\u00a0%',
      '9.69\u00a0%',
      '0.01\u00a0%',
      '0\u00a0%',
      '−0.5\u00a0%',
    ]);
  });
});

describe('the key of a quote', () => {
  test('members in any order · the same key; another book, date or power · another', () => {
    const input = courseInput();
    const reversed = Object.fromEntries(Object.entries(input).reverse()) as typeof input;
    expect(contentKey(reversed, goldenBook)).toBe(contentKey(input, goldenBook));
    const others = [
      contentKey(input, { id: 'golden', version: 2 }),
      contentKey({ ...input, quotedOn: addDays(QUOTED_ON, 1) }, goldenBook),
      contentKey(courseInput({ eyes: { OD: eye('lasik -3.25'), OS: eye('lasik -2.50') } }), goldenBook),
    ];
    expect(new Set([contentKey(input, goldenBook), ...others]).size).toBe(4);
  });
  test('canonical JSON · sorts, leaves out what is undefined, refuses what JSON cannot hold', () => {
    expect(canonicalJson({ b: [1, null], a: 'ä', c: undefined })).toBe('{"a":"ä","b":[1,null]}');
    expect(() => canonicalJson(Number.NaN)).toThrow(TypeError);
    expect(() => canonicalJson([() => 1])).toThrow(TypeError);
  });
});

describe('what is kept of one eye', () => {
  const ladder = goldenBook.cancellation;
  const what = {
    event: 'cancels' as const,
    acceptedOn: QUOTED_ON,
    surgeryOn: SURGERY_ON,
    shareMinor: eur(2_000),
  };
  const kept = (daysBefore: number, change: Partial<Parameters<typeof keptByLadder>[1]> = {}) => {
    const { keptMinor, by } = keptByLadder(ladder, {
      ...what,
      on: addDays(SURGERY_ON, -daysBefore),
      ...change,
    });
    return [by, keptMinor / 100];
  };
  test('each rung · holds from its days down to the next', () => {
    expect([kept(35), kept(21), kept(20), kept(14), kept(13), kept(1), kept(0)]).toEqual([
      ['reflection', 0],
      ['reflection', 0],
      ['early', 50],
      ['early', 50],
      ['late', 400],
      ['late', 400],
      ['no_show', 1_000],
    ]);
  });
  test('unsuitable or cancelled by the clinic · nothing, on any day', () => {
    expect(kept(0, { event: 'unsuitable' })).toEqual(['unsuitable', 0]);
    expect(kept(3, { event: 'clinic_cancels' })).toEqual(['clinic_cancels', 0]);
  });
  test('no day agreed · the top rung; never more than the share', () => {
    expect(kept(10, { surgeryOn: null })).toEqual(['no_day', 50]);
    expect(kept(20, { shareMinor: eur(30) })).toEqual(['early', 30]);
  });
});

test('costs of a course · stand apart from it, the lender’s among them', () => {
  const input = courseInput({ paymentPlanId: 'lender', addOns: [{ addOnId: 'drops', laterality: 'OU' }] });
  const result = quoteCourse(input, goldenBook);
  if (!result.ok) throw new Error(JSON.stringify(result.refusals));
  const costs = quoteCosts(input, result.course, {
    perEyeMinor: { lasik: eur(300) },
    addOnMinor: { drops: eur(12) },
    lender: { lender: { rateBp: 500, fixedMinor: eur(10) } },
  });
  // 5 % of 4,070 − 400, and 10; 4,070 less 5.00 tax
  expect(costs).toEqual({
    directMinor: { OD: eur(300), OS: eur(300) },
    addOnsMinor: eur(12),
    lenderDiscountMinor: eur(193.5),
    totalMinor: eur(805.5),
    leftMinor: eur(4_065 - 805.5),
  });
  expect(JSON.stringify(result.course)).not.toMatch(/cost|discountRate/i);
});
