import { expect, test } from 'vitest';
import { quoteCourse } from '#domain/pricing/index';
import { clinicDate } from '#domain/time/index';
import { demoPriceBook } from '#seeds/price-book';
import { courseInput, eye } from '#tests/factories/courses';
import { eur } from '#tests/factories/golden-book';

test('the demo book · prices the quote that was drawn for the sheet, figure by figure', () => {
  const result = quoteCourse(
    courseInput({
      priceListId: 'hospital-staff',
      eyes: {
        OD: eye('lenticule-extraction -2.00 -1.50 x 75', 'cover-24'),
        OS: eye('surface-ablation -2.75 -0.50 x 110', 'cover-24'),
      },
      surgery: { plan: 'same_session', on: clinicDate('2026-04-09') },
    }),
    demoPriceBook,
  );
  if (!result.ok) throw new Error(JSON.stringify(result.refusals));
  const { course } = result;
  expect(course.lines.map(({ id, amountMinor }) => [id, amountMinor / 100])).toEqual([
    ['surgery:OD', 2_350],
    ['surgery:OS', 1_900],
    ['band:cylinder-1.50:OD', 150],
    ['add-on:axis-marking:OD', 60],
    ['second-eye:OS', -190],
    ['aftercare:six-visits:OU', 300],
    ['cover:cover-24:OD', 90],
    ['cover:cover-24:OS', 90],
    ['price-list:hospital-staff:OD', -106],
    ['price-list:hospital-staff:OS', -72],
    ['price-list:hospital-staff:OU', -12],
  ]);
  expect(course.columns).toEqual({ OD: eur(2_544), OS: eur(1_728), OU: eur(288) });
  expect(course.totalMinor).toBe(eur(4_560));
  expect(course.validUntil).toBe('2026-04-10');
  expect(course.schedule.map(({ dueOn, amountMinor }) => [dueOn, amountMinor])).toEqual([
    ['2026-03-12', eur(456)],
    ['2026-04-02', eur(4_104)],
  ]);
  expect(course.cancellation.slice(0, 2).map(({ until, comesBackMinor }) => [until, comesBackMinor])).toEqual(
    [
      ['2026-03-19', eur(456)],
      ['2026-04-02', eur(306)],
    ],
  );
});

test('the demo package · costs 4,990.00 and is allocated as worked out', () => {
  const eyes = { OD: eye('lasik -3.00'), OS: eye('lasik -3.00') };
  const result = quoteCourse(courseInput({ eyes, packageId: 'both-eyes-all-in' }), demoPriceBook);
  if (!result.ok) throw new Error(JSON.stringify(result.refusals));
  expect(result.course.totalMinor).toBe(eur(4_990));
  expect(result.course.obligations.map(({ allocatedMinor }) => allocatedMinor)).toEqual([
    13_785, 220_553, 220_552, 27_569, 16_541,
  ]);
});
