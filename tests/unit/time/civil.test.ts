import fc from 'fast-check';
import { Temporal } from 'temporal-polyfill';
import { expect, test } from 'vitest';
import { addDays, addMonths, type ClinicDate, daysBetween } from '#domain/time/index';

const day = fc
  .integer({ min: -200_000, max: 2_000_000 })
  .map((n) => Temporal.PlainDate.from('1970-01-01').add({ days: n }).toString() as ClinicDate);

test('days and months added · on any day · agree with Temporal', () => {
  fc.assert(
    fc.property(day, fc.integer({ min: -4_000, max: 4_000 }), (from, n) => {
      const date = Temporal.PlainDate.from(from);
      expect(addDays(from, n)).toBe(date.add({ days: n }).toString());
      expect(addMonths(from, n % 300)).toBe(date.add({ months: n % 300 }).toString());
      expect(daysBetween(from, addDays(from, n))).toBe(n);
    }),
    { numRuns: 2_000 },
  );
});

test('days added · beyond the calendar’s years · are refused', () => {
  expect(() => addDays('9999-12-31' as ClinicDate, 1)).toThrow(RangeError);
});
