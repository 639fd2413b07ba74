import { describe, expect, test } from 'vitest';
import {
  addMonths,
  clinicDate,
  dayOf,
  daysBetween,
  formatDayWithWeekday,
  instant,
  instantAt,
  isClinicDate,
  lastOfMonth,
} from '#domain/time/index';

describe('clinic dates', () => {
  test('a day that is none · is refused', () => {
    expect(isClinicDate('2026-02-30')).toBe(false);
    expect(() => clinicDate('12/03/2026')).toThrow(RangeError);
  });
  test('month ends · are kept inside the month', () => {
    expect(addMonths(clinicDate('2026-01-31'), 1)).toBe('2026-02-28');
    expect(lastOfMonth(clinicDate('2028-02-03'))).toBe('2028-02-29');
  });
  test('late in the evening · the day is the site’s, not UTC’s', () => {
    expect(dayOf(instant('2026-03-12T23:30:00Z'), 'Europe/Berlin')).toBe('2026-03-13');
    expect(dayOf(instant('2026-03-12T23:30:00Z'), 'Europe/London')).toBe('2026-03-12');
  });
  test('a wall clock in summer · is an hour ahead of UTC in London', () => {
    expect(instantAt(clinicDate('2026-07-01'), '08:40', 'Europe/London')).toBe('2026-07-01T07:40:00.000Z');
  });
  test('across a change of the clocks · days still count as days', () => {
    expect(daysBetween(clinicDate('2026-03-28'), clinicDate('2026-03-30'))).toBe(2);
    expect(formatDayWithWeekday(clinicDate('2026-03-12'))).toBe('Thu 12 March 2026');
  });
});
