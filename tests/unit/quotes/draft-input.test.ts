import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { formatPower, transpose } from '#domain/prescription/index';
import { compilePriceBook } from '#domain/pricing/index';
import {
  newDraft,
  type OptionDraft,
  optionInput,
  optionWords,
  parseRate,
  priceOption,
  type QuoteDraft,
} from '#domain/quotes/index';
import { clinicDate } from '#domain/time/index';
import { demoPriceBook } from '#seeds/price-book';
import { anyPrescription, rx } from '#tests/factories/prescriptions';

const compiled = compilePriceBook(demoPriceBook);
const facts = { quotedOn: clinicDate('2026-03-12'), approvedPlan: null };
const MARA = {
  OD: { sphere: '−2.00', cylinder: '−1.50', axis: '75', vertex: '' },
  OS: { sphere: '-2.75', cylinder: '-0.50', axis: '110', vertex: '' },
};

function draftOf(option: Partial<OptionDraft> = {}, prescriptions: QuoteDraft['prescriptions'] = MARA) {
  const draft = newDraft({
    prescriptions,
    approved: { OD: ['lenticule-extraction'], OS: ['surface-ablation'] },
    priceListId: null,
    book: demoPriceBook,
  });
  return { ...draft, options: draft.options.map((each) => ({ ...each, ...option })) };
}

function priced(draft: QuoteDraft) {
  const [option] = draft.options;
  if (!option) throw new Error('no option');
  return priceOption(draft, option, facts, compiled);
}

function refusedFields(draft: QuoteDraft): string[] {
  const result = priced(draft);
  return result.ok ? [] : result.refusals.map((refusal) => refusal.field);
}

describe('new draft', () => {
  test('with a plan · takes the first procedure of each eye that the book has', () => {
    expect(draftOf().options[0]?.procedures).toEqual({ OD: 'lenticule-extraction', OS: 'surface-ablation' });
    const other = newDraft({
      prescriptions: {},
      approved: { OD: ['gone', 'lasik'], OS: ['gone'] },
      priceListId: 'no-such-list',
      book: demoPriceBook,
    });
    expect(other.options[0]).toMatchObject({ procedures: { OD: 'lasik', OS: null }, priceListId: null });
  });
});

describe('name of an option', () => {
  test.each([
    [{}, 'Both eyes on one day'],
    [{ label: ' The short way ' }, 'The short way'],
    [{ packageId: 'both-eyes-all-in' }, 'Both eyes, all in'],
    [{ packageId: 'gone' }, 'Both eyes on one day'],
    [{ procedures: { OD: 'lasik', OS: null } }, 'Right eye'],
    [{ procedures: { OD: null, OS: 'lasik' } }, 'Left eye'],
    [{ procedures: { OD: null, OS: null } }, 'Nothing chosen yet'],
    [{ surgery: { plan: 'staged', on: { OD: null, OS: null } } }, 'One eye after the other'],
  ] as const)('%j · is told in words', (option, words) => {
    const [made] = draftOf(option).options;
    expect(made && optionWords(made, demoPriceBook)).toBe(words);
  });
});

describe('option of a draft', () => {
  test('as drawn on the quote sheet · prices to 4,560.00', () => {
    const draft = draftOf({
      covers: { OD: 'cover-24', OS: 'cover-24' },
      priceListId: 'hospital-staff',
      surgery: { plan: 'same_session', on: clinicDate('2026-04-09') },
    });
    const result = priced(draft);
    expect(result.ok && result.course.totalMinor).toBe(456_000);
  });

  test('typed in the other cylinder sign · gives the same total (invariant 14)', () => {
    const other = draftOf(
      {},
      {
        OD: { sphere: '-3.50', cylinder: '+1.50', axis: '165', vertex: '12' },
        OS: { sphere: '-3.25', cylinder: '+.5', axis: '20', vertex: '' },
      },
    );
    const [mine, theirs] = [priced(draftOf()), priced(other)];
    expect(mine.ok && theirs.ok && mine.course.totalMinor === theirs.course.totalMinor).toBe(true);
  });

  test('any prescription, either notation · prices or is refused alike', () => {
    const typed = (eye: ReturnType<typeof rx>) => ({
      sphere: eye.sphereMd === 0 ? 'pl' : formatPower(eye.sphereMd),
      cylinder: eye.cylinderMd === null ? '' : formatPower(eye.cylinderMd),
      axis: eye.axisDeg === null ? '' : String(eye.axisDeg),
      vertex: String(eye.vertexMm),
    });
    fc.assert(
      fc.property(anyPrescription, (eye) => {
        const one = priced(draftOf({}, { OD: typed(eye), OS: typed(rx('-1.00')) }));
        const two = priced(draftOf({}, { OD: typed(transpose(eye)), OS: typed(rx('-1.00')) }));
        // A sphere beyond the limit in one sign can be within it in the other; nothing else may tell them apart.
        if (one.ok && two.ok) expect(two.course.totalMinor).toBe(one.course.totalMinor);
        else if (one.ok !== two.ok) {
          const refusal = one.ok ? two : one;
          expect(!refusal.ok && refusal.refusals.every(({ words }) => words.includes('beyond'))).toBe(true);
        }
      }),
      { numRuns: 300 },
    );
  });

  test('an eye that is not treated · may hold anything at all', () => {
    const unread = { ...MARA, OS: { sphere: 'tbc', cylinder: '', axis: '', vertex: '' } };
    expect(refusedFields(draftOf({ procedures: { OD: 'lasik', OS: null } }, unread))).toEqual([]);
    expect(refusedFields(draftOf({}, unread))).toEqual(['eyes.OS.prescription.sphere']);
  });

  test('several faults · are named together, each by the engine’s field', () => {
    const draft = draftOf(
      {
        discounts: [
          { discountId: 'goodwill', size: 'much' },
          { discountId: 'two-of-a-family', size: '1.234,567' },
        ],
      },
      { ...MARA, OD: { sphere: '2', cylinder: '-1.10', axis: '75', vertex: '' } },
    );
    expect(refusedFields(draft)).toEqual([
      'eyes.OD.prescription.sphere',
      'discounts.0.off',
      'discounts.1.off',
    ]);
  });

  test('a discount as typed · is a rate or an amount as the book says', () => {
    const draft = draftOf({
      discounts: [
        { discountId: 'goodwill', size: '2,5 %' },
        { discountId: 'two-of-a-family', size: '1,20' },
      ],
    });
    const [option] = draft.options;
    const read = option && optionInput(draft, option, facts, demoPriceBook);
    expect(read?.ok && read.input.discounts).toEqual([
      { discountId: 'goodwill', off: { kind: 'rate', rateBp: 250 } },
      { discountId: 'two-of-a-family', off: { kind: 'amount', amountMinor: 120 } },
    ]);
  });
});

describe('typed rate', () => {
  test.each([
    ['4', 400],
    ['4 %', 400],
    ['2.5', 250],
    [' 2,25% ', 225],
    ['0.05', 5],
    ['100', 10_000],
  ])('%s · is read', (text, rateBp) => {
    expect(parseRate(text)).toBe(rateBp);
  });

  test.each(['', '-4', '101', '4.555', 'four', '1e2', '%'])('%s · is refused', (text) => {
    expect(parseRate(text)).toBeNull();
  });
});
