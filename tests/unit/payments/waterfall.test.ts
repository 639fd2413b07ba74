import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import type { Eye } from '#domain/eye';
import { minor } from '#domain/money/index';
import { type CourseShares, type DueSum, dueNow, moneyState, paidFor } from '#domain/payments/index';
import { type ClinicDate, clinicDate } from '#domain/time/index';
import { CASES } from '#tests/factories/cases';
import { anyDay } from '#tests/factories/entries';

const day = clinicDate;
const course = (total: number, ...eyes: [Eye, number, string | null][]): CourseShares => ({
  totalMinor: minor(total),
  eyes: eyes.map(([eye, share, on]) => ({
    eye,
    shareMinor: minor(share),
    surgeryOn: on === null ? null : day(on),
  })),
});
const due = (dueNo: number, on: string | null, amount: number): DueSum => ({
  dueNo,
  dueOn: on === null ? null : day(on),
  amountMinor: minor(amount),
});

describe('paidFor', () => {
  const sameDay = course(1_000, ['OS', 450, '2026-04-10'], ['OD', 450, '2026-04-10']);
  const staged = course(1_000, ['OD', 450, '2026-05-10'], ['OS', 450, '2026-04-10']);
  const undated = course(1_000, ['OD', 450, null], ['OS', 450, '2026-04-10']);
  test.each<[string, CourseShares, number, (string | number)[]]>([
    ['nothing', sameDay, 0, ['OD none', 'OS none', 0]],
    ['a deposit goes to the right eye first', sameDay, 100, ['OD half', 'OS none', 0]],
    ['the right eye whole, the left begun', sameDay, 500, ['OD whole', 'OS half', 0]],
    ['both eyes, the rest begun', sameDay, 950, ['OD whole', 'OS whole', 50]],
    ['more than everything', sameDay, 1_200, ['OD whole', 'OS whole', 100]],
    ['the earlier surgery first', staged, 450, ['OD none', 'OS whole', 0]],
    ['an eye without a day last', undated, 460, ['OD half', 'OS whole', 0]],
    ['an eye that costs nothing is paid', course(0, ['OD', 0, null]), 0, ['OD whole', 0]],
  ])('%s', (_, what, paid, expected) => {
    const { eyes, restPaidMinor } = paidFor(what, [], minor(paid));
    expect([...eyes.map(({ eye, money }) => `${eye} ${money}`), restPaidMinor]).toEqual(expected);
  });
  test('sums due · are filled by their day · those without a day last', () => {
    const dues = [due(1, '2026-03-01', 100), due(2, null, 300), due(3, '2026-02-01', 200)];
    expect(paidFor(sameDay, dues, minor(250)).dues.map(({ paidMinor }) => paidMinor)).toEqual([50, 0, 200]);
  });

  const anyCourse = fc.record({
    od: fc.nat({ max: 500_000 }),
    os: fc.nat({ max: 500_000 }),
    rest: fc.nat({ max: 50_000 }),
    odOn: fc.option(anyDay),
    osOn: fc.option(anyDay),
    paid: fc.nat({ max: 1_200_000 }),
    more: fc.nat({ max: 100_000 }),
    dues: fc.array(fc.record({ on: fc.option(anyDay), amount: fc.integer({ min: 1, max: 400_000 }) }), {
      maxLength: 6,
    }),
  });
  test('any course · any payment · is shared out whole, never back to front, and more never pays for less', () => {
    fc.assert(
      fc.property(anyCourse, ({ od, os, rest, odOn, osOn, paid, more, dues }) => {
        const what = course(od + os + rest, ['OD', od, odOn], ['OS', os, osOn]);
        const list = dues.map(({ on, amount }, index) => due(index + 1, on, amount));
        const result = paidFor(what, list, minor(paid));
        const eyes = result.eyes.reduce((total, { paidMinor }) => total + paidMinor, 0);
        expect(eyes + result.restPaidMinor).toBe(Math.min(paid, od + os + rest));
        const asked = dues.reduce((total, { amount }) => total + amount, 0);
        expect(result.dues.reduce((total, { paidMinor }) => total + paidMinor, 0)).toBe(
          Math.min(paid, asked),
        );
        for (const { unpaidMinor, paidMinor, money } of result.eyes) {
          expect(money).toBe(moneyState(paidMinor, minor(paidMinor + unpaidMinor)));
        }
        if (result.restPaidMinor > 0)
          expect(result.eyes.every(({ unpaidMinor }) => unpaidMinor === 0)).toBe(true);
        const later = paidFor(what, list, minor(paid + more));
        result.eyes.forEach(({ paidMinor }, index) => {
          expect(later.eyes[index]?.paidMinor ?? -1).toBeGreaterThanOrEqual(paidMinor);
        });
      }),
      { numRuns: CASES },
    );
  });
});

describe('dueNow', () => {
  const dues = [due(1, '2026-03-01', 499), due(2, '2026-04-03', 4_491), due(3, null, 300)];
  test.each<[string, number, number]>([
    ['2026-02-28', 0, 0],
    ['2026-03-01', 0, 499],
    ['2026-03-01', 200, 299],
    ['2026-04-03', 499, 4_491],
    ['2026-12-31', 0, 4_990],
    ['2026-04-03', 9_999, 0],
  ])('on %s with %i paid · is %i', (today, paid, expected) => {
    expect(dueNow(dues, minor(paid), day(today) as ClinicDate)).toBe(expected);
  });
});
