import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import type { Laterality } from '#domain/eye';
import { sum } from '#domain/money/index';
import { transpose } from '#domain/prescription/index';
import {
  type CourseInput,
  canonicalJson,
  compilePriceBook,
  type PriceBook,
  type PricedCourse,
  quoteCourse,
} from '#domain/pricing/index';
import { anyCourse, anyPriceBook, CASES } from '#tests/factories/price-books';

/** A course whose only reason not to be priced may be that a plan of payment needs more than nothing to spread. */
function price(input: CourseInput, book: PriceBook): PricedCourse | null {
  const result = quoteCourse(input, book);
  if (result.ok) return result.course;
  expect(result.refusals.map((refusal) => refusal.code)).toEqual(['plan_needs_more']);
  return null;
}

function always(check: (course: PricedCourse, input: CourseInput, book: PriceBook) => void): void {
  const property = fc.property(anyPriceBook, anyCourse, (book, input) => {
    const course = price(input, book);
    if (course) check(course, input, book);
  });
  fc.assert(property, { numRuns: CASES });
}

const swapped = { OD: 'OS', OS: 'OD', OU: 'OU' } as const satisfies Record<Laterality, Laterality>;

function swapEyes(input: CourseInput): CourseInput {
  const { surgery } = input;
  return {
    ...input,
    eyes: { OD: input.eyes.OS, OS: input.eyes.OD },
    surgery:
      surgery.plan === 'staged' ? { plan: 'staged', on: { OD: surgery.on.OS, OS: surgery.on.OD } } : surgery,
    addOns: input.addOns.map(({ addOnId, laterality }) => ({ addOnId, laterality: swapped[laterality] })),
  };
}

function otherNotation(input: CourseInput): CourseInput {
  const turn = (wish: CourseInput['eyes']['OD']) =>
    wish && { ...wish, prescription: transpose(wish.prescription) };
  return { ...input, eyes: { OD: turn(input.eyes.OD), OS: turn(input.eyes.OS) } };
}

describe('whatever is quoted from whatever book', () => {
  test('lines and columns · add up to the total (invariant 12)', () => {
    always((course) => {
      expect(sum(course.lines.map((line) => line.amountMinor))).toBe(course.totalMinor);
      for (const split of [course.columns, course.shares]) {
        expect(split.OD + split.OS + split.OU).toBe(course.totalMinor);
      }
      for (const column of ['OD', 'OS', 'OU'] as const) {
        const lines = course.lines.filter((line) => line.laterality === column);
        expect(sum(lines.map((line) => line.amountMinor))).toBe(course.columns[column]);
      }
    });
  });

  test('lines · carry an id of their own, a reason and a rule of the book', () => {
    always((course) => {
      expect(new Set(course.lines.map((line) => line.id)).size).toBe(course.lines.length);
      for (const line of course.lines) {
        expect(line.why.length).toBeGreaterThan(0);
        expect(line.ruleLine).toBeGreaterThan(0);
      }
    });
  });

  test('tax · net and tax add up to gross, and gross to the total', () => {
    always((course) => {
      for (const tax of course.taxes) expect(tax.netMinor + tax.taxMinor).toBe(tax.grossMinor);
      expect(sum(course.taxes.map((tax) => tax.grossMinor))).toBe(course.totalMinor);
      expect(course.netMinor + course.taxMinor).toBe(course.totalMinor);
    });
  });

  test('the schedule · adds up to the total, in parts above zero, never before acceptance', () => {
    always((course, input) => {
      expect(sum(course.schedule.map((due) => due.amountMinor))).toBe(course.totalMinor);
      for (const due of course.schedule) {
        expect(due.amountMinor).toBeGreaterThan(0);
        if (due.dueOn) expect(due.dueOn >= input.quotedOn).toBe(true);
      }
      const deposit = course.schedule.find((due) => due.kind === 'deposit');
      expect(deposit?.amountMinor ?? 0).toBe(course.depositMinor);
    });
  });

  test('obligations and their parts · add up to the price without tax', () => {
    always((course) => {
      expect(sum(course.obligations.map((each) => each.allocatedMinor))).toBe(course.netMinor);
      for (const { parts, allocatedMinor } of course.obligations) {
        expect(sum(parts.map((part) => part.amountMinor))).toBe(allocatedMinor);
        for (const part of parts) expect(part.amountMinor).toBeGreaterThanOrEqual(0);
      }
      const ids = course.obligations.flatMap((each) => each.parts.map((part) => part.id));
      expect(new Set(ids).size).toBe(ids.length);
    });
  });

  test('the eyes swapped · cost the same (invariant 14)', () => {
    always((course, input, book) => {
      const other = price(swapEyes(input), book);
      expect(other?.totalMinor).toBe(course.totalMinor);
      expect(other?.taxMinor).toBe(course.taxMinor);
      expect(other?.depositMinor).toBe(course.depositMinor);
    });
  });

  test('the other cylinder notation · changes no figure (invariant 14)', () => {
    always((course, input, book) => {
      const other = price(otherNotation(input), book);
      const figures = ({ lines, ...rest }: PricedCourse) => ({
        ...rest,
        lines: lines.map(({ why: _, ...line }) => line),
      });
      expect(other && figures(other)).toEqual(figures(course));
    });
  });

  test('an add-on more · never lowers the total', () => {
    const more = ['session-add-on', 'course-add-on', 'assessment', 'eye-add-on'];
    always((course, input, book) => {
      for (const addOnId of more) {
        const laterality = addOnId === 'eye-add-on' ? (input.eyes.OD ? 'OD' : 'OS') : 'OU';
        if (input.addOns.some((wish) => wish.addOnId === addOnId && wish.laterality === laterality)) continue;
        const bigger = price({ ...input, addOns: [...input.addOns, { addOnId, laterality }] }, book);
        expect(bigger?.totalMinor).toBeGreaterThanOrEqual(course.totalMinor);
      }
    });
  });

  test('a package · never costs more than its parts', () => {
    always((course, input, book) => {
      const { includes } = book.packages[0] ?? { includes: { addOnIds: [], coverId: null } };
      if (input.packageId === null) return;
      const included = includes.addOnIds.flatMap((addOnId) =>
        (addOnId === 'eye-add-on' ? (['OD', 'OS'] as const) : (['OU'] as const)).map((laterality) => ({
          addOnId,
          laterality,
        })),
      );
      const extra = included.filter(
        ({ addOnId, laterality }) =>
          !input.addOns.some((wish) => wish.addOnId === addOnId && wish.laterality === laterality),
      );
      const cover = (wish: CourseInput['eyes']['OD']) =>
        wish && { ...wish, coverId: includes.coverId ?? wish.coverId };
      const asParts = price(
        {
          ...input,
          packageId: null,
          addOns: [...input.addOns, ...extra],
          eyes: { OD: cover(input.eyes.OD), OS: cover(input.eyes.OS) },
        },
        book,
      );
      expect(asParts?.totalMinor).toBeGreaterThanOrEqual(course.totalMinor);
    });
  });

  test('what comes off · never makes a column negative, nor more than the undiscounted price', () => {
    always((course, input, book) => {
      for (const column of ['OD', 'OS', 'OU'] as const)
        expect(course.columns[column]).toBeGreaterThanOrEqual(0);
      for (const tax of course.taxes) expect(tax.netMinor).toBeGreaterThanOrEqual(0);
      const without = price({ ...input, discounts: [], paymentPlanId: null }, book);
      const withThem = price({ ...input, paymentPlanId: null }, book);
      expect(withThem?.totalMinor).toBeLessThanOrEqual(without?.totalMinor ?? -1);
    });
  });

  test('the ladder · gives back no more than was asked for and keeps no more than the price', () => {
    always((course) => {
      const price =
        course.totalMinor - (course.credit?.kind === 'fee_bearing' ? course.credit.chargeMinor : 0);
      for (const row of course.cancellation) {
        expect(row.keptMinor).toBeGreaterThanOrEqual(0);
        expect(row.keptMinor).toBeLessThanOrEqual(price);
        if (row.paidMinor === null || row.comesBackMinor === null) continue;
        expect(row.paidMinor).toBeLessThanOrEqual(course.totalMinor);
        expect(row.comesBackMinor).toBeLessThanOrEqual(row.paidMinor);
        expect(row.comesBackMinor).toBeGreaterThanOrEqual(0);
      }
      const days = course.cancellation.flatMap(({ until }) => until ?? []);
      expect([...days].sort()).toEqual(days);
    });
  });

  test('credit · its instalments repay what it says, at no rate where nothing is charged', () => {
    always((course) => {
      const { credit } = course;
      if (!credit) return;
      expect(sum(credit.instalments.map((each) => each.amountMinor))).toBe(credit.payableMinor);
      expect(credit.creditMinor + credit.chargeMinor).toBe(credit.payableMinor);
      if (credit.kind === 'interest_free') expect([credit.chargeMinor, credit.aprBp]).toEqual([0, 0]);
      else if (credit.chargeMinor > 0) expect(credit.aprBp).toBeGreaterThanOrEqual(0);
    });
  });

  test('the same input and book · the same bytes, compiled or not, as given or read back (invariant 13)', () => {
    always((course, input, book) => {
      const bytes = canonicalJson(course);
      const copy = JSON.parse(JSON.stringify(book)) as PriceBook;
      const readBack = JSON.parse(JSON.stringify(input)) as CourseInput;
      const again = quoteCourse(readBack, compilePriceBook(copy));
      expect(again.ok && canonicalJson(again.course)).toBe(bytes);
      expect(JSON.parse(JSON.stringify(course))).toEqual(course);
    });
  });
});
